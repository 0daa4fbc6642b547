"use client";
import { Button } from "@/components/ui/button";
import { Page, PageHead } from "@/components/ui/section";

type ErrorPageProps = { error: Error & { digest?: string }; reset: () => void };

export default function ErrorPage({ error, reset }: ErrorPageProps) {
  return (
    <Page>
      <PageHead
        title="This page failed"
        lead="Nothing you sent before was undone. Try again; if it fails again, give the reference below to whoever runs this installation."
      />
      {error.digest && (
        <p className="pb-4">
          Reference <code>{error.digest}</code>
        </p>
      )}
      <Button look="action" onClick={reset}>
        Try again
      </Button>
    </Page>
  );
}
