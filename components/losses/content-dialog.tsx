"use client";
import { useQuery } from "@tanstack/react-query";
import { useState } from "react";
import type { SummaryContentView } from "@/lib/losses/summary-schema";
import type { ApiProblem } from "../api";
import { Button } from "../ui/button";
import { Dialog } from "../ui/dialog";
import { Notice } from "../ui/notice";

type ContentDialogProps = {
  title: string;
  read: () => Promise<SummaryContentView | null>;
  readKey: readonly string[];
  onClose: () => void;
};

/** A message as its reader sees it, in HTML or in plain text. */
export function ContentDialog({ title, read, readKey, onClose }: ContentDialogProps) {
  const [asText, setAsText] = useState(false);
  const content = useQuery<SummaryContentView | null, ApiProblem>({
    queryKey: [...readKey],
    queryFn: read,
    gcTime: 0,
  });
  const { data } = content;
  return (
    <Dialog
      open
      wide
      onOpenChange={onClose}
      title={title}
      description={data ? `Subject: ${data.subject}` : "Reading the message"}
      footer={
        <>
          <Button aria-pressed={asText} onClick={() => setAsText(!asText)}>
            Plain text
          </Button>
          <Button look="action" onClick={onClose}>
            Close
          </Button>
        </>
      }
    >
      <div className="h-[46vh] overflow-auto border border-rule">
        {content.error && <Notice kind="error">{content.error.message}</Notice>}
        {data && asText && (
          // biome-ignore lint/a11y/noNoninteractiveTabindex: what scrolls must be reachable by keyboard (WCAG 2.1.1)
          <pre tabIndex={0} className="whitespace-pre-wrap p-3 font-mono text-small">
            {data.text}
          </pre>
        )}
        {data && !asText && (
          // Nothing in it runs, and its links lead nowhere from here.
          <iframe sandbox="" srcDoc={data.html} title="The message" className="h-full w-full bg-paper" />
        )}
      </div>
    </Dialog>
  );
}
