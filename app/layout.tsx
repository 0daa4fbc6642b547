import type { Metadata, Viewport } from "next";
import { headers } from "next/headers";
import type { ReactNode } from "react";
import { AppShell, type MenuPage } from "@/components/shell/app-shell";
import { Providers } from "@/components/shell/providers";
import { mayDo } from "@/lib/auth/demand";
import { type PageContext, signedInContext } from "@/lib/auth/page-context";
import { PAGES } from "@/lib/auth/pages";
import { fontVariables } from "./fonts/faces";
import "./globals.css";

export const metadata: Metadata = {
  title: { default: "Cupel", template: "%s · Cupel" },
  description: "Payment-fraud alerts, weighed and decided",
  robots: { index: false, follow: false },
};

export const viewport: Viewport = { width: "device-width", initialScale: 1 };

/** Not in the menu: the way in, and what is reached by the person's name. */
const ELSEWHERE: readonly string[] = ["/", "/sign-in", "/profile"];

function menuOf(ctx: PageContext): MenuPage[] {
  return Object.entries(PAGES).flatMap(([path, { may, name }]) =>
    path.includes("[") || ELSEWHERE.includes(path) || may === "anyone" || !mayDo(ctx.actor, may)
      ? []
      : [{ path, name }],
  );
}

export default async function RootLayout({ children }: { children: ReactNode }) {
  // Reading the request keeps every page dynamic, as a nonce of its own needs.
  const nonce = (await headers()).get("x-nonce") ?? undefined;
  const ctx = await signedInContext();
  return (
    // The theme script sets an attribute before React wakes.
    <html lang="en-GB" className={fontVariables} suppressHydrationWarning>
      <body>
        <Providers timeZone={ctx?.actor.timeZone ?? "UTC"} nonce={nonce}>
          {ctx ? (
            <AppShell pages={menuOf(ctx)} person={{ personId: ctx.actor.personId, name: ctx.actor.name }}>
              {children}
            </AppShell>
          ) : (
            <main id="main">{children}</main>
          )}
        </Providers>
      </body>
    </html>
  );
}
