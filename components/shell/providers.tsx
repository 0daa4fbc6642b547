"use client";
import { QueryClient, QueryClientProvider } from "@tanstack/react-query";
import { ThemeProvider } from "next-themes";
import { NuqsAdapter } from "nuqs/adapters/next/app";
import { type ReactNode, useState } from "react";
import { ApiProblem } from "../api";
import { ZoneProvider } from "../ui/time";

/** A refusal stays one however often it is asked; only silence and the server's own failures are worth another try. */
function retry(failures: number, error: Error): boolean {
  return failures < 2 && error instanceof ApiProblem && (error.status === 0 || error.status >= 500);
}

function newQueryClient(): QueryClient {
  return new QueryClient({
    defaultOptions: { queries: { staleTime: 10_000, retry }, mutations: { retry: false } },
  });
}

type ProvidersProps = {
  timeZone: string;
  /** Of this page, so that the theme's own script may run. */
  nonce: string | undefined;
  children: ReactNode;
};

export function Providers({ timeZone, nonce, children }: ProvidersProps) {
  const [client] = useState(newQueryClient);
  return (
    <ThemeProvider
      attribute="data-theme"
      defaultTheme="system"
      disableTransitionOnChange
      {...(nonce && { nonce })}
    >
      <NuqsAdapter>
        <QueryClientProvider client={client}>
          <ZoneProvider value={timeZone}>{children}</ZoneProvider>
        </QueryClientProvider>
      </NuqsAdapter>
    </ThemeProvider>
  );
}
