"use client";
import { useRouter } from "next/navigation";
import { useState } from "react";
import type { SummariesView, SummaryItem } from "@/lib/losses/summary-schema";
import { api } from "../api";
import { ConfirmDialog } from "../people/confirm-dialog";
import { Button } from "../ui/button";
import { EmptyState } from "../ui/empty-state";
import { Notice } from "../ui/notice";
import { Section } from "../ui/section";
import { ContentDialog } from "./content-dialog";
import { SummariesTable } from "./summaries-table";

type SummariesSectionProps = { view: SummariesView; week: string; mayManage: boolean };

type Asking =
  | { what: "send-now" | "preview" }
  | { what: "send-again" | "mark-as-sent" | "content"; item: SummaryItem };

/** Past summaries as sent, and what a person can do about one that failed or is uncertain. */
export function SummariesSection({ view, week, mayManage }: SummariesSectionProps) {
  const router = useRouter();
  const [said, setSaid] = useState<string | null>(null);
  const [asking, setAsking] = useState<Asking | null>(null);
  const close = () => setAsking(null);
  const done = (words: string) => {
    close();
    setSaid(words);
    router.refresh();
  };
  return (
    <Section
      title="Summaries sent"
      lead="With any other mail that failed, or whose arrival is uncertain."
      actions={
        <>
          <Button onClick={() => setAsking({ what: "preview" })}>Preview {week}</Button>
          {mayManage && <Button onClick={() => setAsking({ what: "send-now" })}>Send {week} now</Button>}
        </>
      }
    >
      <div aria-live="polite">{said && <Notice className="mb-4">{said}</Notice>}</div>
      {view.items.length === 0 ? (
        <EmptyState title="No summary has been sent yet">
          The first goes out on the next morning that somebody on the list has chosen.
        </EmptyState>
      ) : (
        <SummariesTable
          items={view.items}
          mayManage={mayManage}
          onShow={(item) => setAsking({ what: "content", item })}
          onSendAgain={(item) => setAsking({ what: "send-again", item })}
          onMarkAsSent={(item) => setAsking({ what: "mark-as-sent", item })}
        />
      )}
      {asking?.what === "preview" && (
        <ContentDialog
          title={`As it would go out now: ${week}`}
          read={() => api("GET /api/summaries/preview", { week })}
          readKey={["summary-preview", week]}
          onClose={close}
        />
      )}
      {asking?.what === "content" && (
        <ContentDialog
          title={`As sent to ${asking.item.person.name}`}
          read={() => api("GET /api/summaries/{id}", { id: asking.item.id })}
          readKey={["summary", asking.item.id]}
          onClose={close}
        />
      )}
      {asking?.what === "send-now" && (
        <ConfirmDialog
          title={`Send ${week} now?`}
          says="Everybody on the list who has not been sent this week's summary gets it at once, instead of on their morning."
          verb="Send now"
          act={() => api("POST /api/summaries/send-now", { week })}
          onClose={close}
          onDone={(answer) =>
            done(
              `${answer?.queued ?? 0} on their way; ${answer?.alreadyQueued ?? 0} had been sent this week's before.`,
            )
          }
        />
      )}
      {asking?.what === "send-again" && (
        <ConfirmDialog
          title={`Send to ${asking.item.person.name} again?`}
          says={
            asking.item.state === "uncertain"
              ? "The first may have arrived, so they may get it twice. It carries the same Message-ID."
              : "The mail server refused it before. Nothing has arrived."
          }
          verb="Send again"
          act={() => api("POST /api/summaries/{id}/send-again", { id: asking.item.id })}
          onClose={close}
          onDone={() => done(`Queued again for ${asking.item.person.name}.`)}
        />
      )}
      {asking?.what === "mark-as-sent" && (
        <ConfirmDialog
          title={`Did it reach ${asking.item.person.name}?`}
          says="Ask them first. Once marked as sent it is not sent again."
          verb="Mark as sent"
          act={() => api("POST /api/summaries/{id}/mark-as-sent", { id: asking.item.id })}
          onClose={close}
          onDone={() => done(`Marked as sent to ${asking.item.person.name}.`)}
        />
      )}
    </Section>
  );
}
