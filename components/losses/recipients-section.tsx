"use client";
import { useRouter } from "next/navigation";
import { useState } from "react";
import type { RecipientsView, RecipientView } from "@/lib/losses/summary-schema";
import { api } from "../api";
import { ConfirmDialog } from "../people/confirm-dialog";
import { Button } from "../ui/button";
import { EmptyState } from "../ui/empty-state";
import { Notice } from "../ui/notice";
import { Section } from "../ui/section";
import { RowTh, Table, Td, Th } from "../ui/table";
import { RecipientDialog } from "./recipient-dialog";
import { hourWords, WEEKDAY_WORDS } from "./weekday-words";

type RecipientsSectionProps = { recipients: RecipientsView; mayManage: boolean };

/** Who gets the weekly summary, and when by their own clock. */
export function RecipientsSection({ recipients, mayManage }: RecipientsSectionProps) {
  const router = useRouter();
  const [said, setSaid] = useState<string | null>(null);
  const [editing, setEditing] = useState<RecipientView | "new" | null>(null);
  const [removing, setRemoving] = useState<RecipientView | null>(null);
  const done = (words: string) => {
    setEditing(null);
    setRemoving(null);
    setSaid(words);
    router.refresh();
  };
  return (
    <Section
      title="Weekly summary"
      lead="Last week's figures by mail, once a week to each of these people."
      actions={
        mayManage &&
        recipients.others.length > 0 && <Button onClick={() => setEditing("new")}>Add somebody</Button>
      }
    >
      <div aria-live="polite">{said && <Notice className="mb-4">{said}</Notice>}</div>
      {recipients.items.length === 0 ? (
        <EmptyState title="Nobody gets the summary yet">A risk manager puts people on the list.</EmptyState>
      ) : (
        <Table caption="Recipients of the weekly summary" captionHidden>
          <thead>
            <tr>
              <Th>Person</Th>
              <Th>Sent</Th>
              <Th>State</Th>
              {mayManage && <Th>Change</Th>}
            </tr>
          </thead>
          <tbody>
            {recipients.items.map((one) => (
              <tr key={one.personId}>
                <RowTh>{one.name}</RowTh>
                <Td>
                  {WEEKDAY_WORDS[one.weekday]}, {hourWords(one.hour)}
                  <span className="block text-small text-soft">{one.timeZone}</span>
                </Td>
                <Td>{one.subscribed ? "On the list" : "Unsubscribed"}</Td>
                {mayManage && (
                  <Td>
                    <span className="flex flex-wrap gap-2">
                      <Button small onClick={() => setEditing(one)} aria-label={`Change ${one.name}`}>
                        {one.subscribed ? "Change" : "Ask again"}
                      </Button>
                      <Button small onClick={() => setRemoving(one)} aria-label={`Take ${one.name} off`}>
                        Take off
                      </Button>
                    </span>
                  </Td>
                )}
              </tr>
            ))}
          </tbody>
        </Table>
      )}
      {editing && (
        <RecipientDialog
          recipient={editing === "new" ? null : editing}
          others={recipients.others}
          onClose={() => setEditing(null)}
          onDone={done}
        />
      )}
      {removing && (
        <ConfirmDialog
          title={`Take ${removing.name} off the list?`}
          says="No further summary is sent to them. Those sent before stay listed."
          verb="Take off"
          act={() => api("DELETE /api/summaries/recipients/{personId}", { personId: removing.personId })}
          onClose={() => setRemoving(null)}
          onDone={() => done(`${removing.name} no longer gets the summary.`)}
        />
      )}
    </Section>
  );
}
