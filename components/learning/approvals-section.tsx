"use client";
import { useState } from "react";
import type { ApprovalsView } from "@/lib/approvals/schema";
import { EmptyState } from "../ui/empty-state";
import { Notice } from "../ui/notice";
import { Section } from "../ui/section";
import { ApprovalCard } from "./approval-card";
import type { SubjectNames } from "./approval-words";
import { SettledTable } from "./settled-table";

type ApprovalsSectionProps = {
  approvals: ApprovalsView;
  names: SubjectNames;
  personId: string;
  maySettle: boolean;
  onSettled: () => void;
};

/** What changes the scorer needs two people: one proposes, another decides. */
export function ApprovalsSection({
  approvals,
  names,
  personId,
  maySettle,
  onSettled,
}: ApprovalsSectionProps) {
  const [said, setSaid] = useState<string | null>(null);
  const waiting = approvals.items.filter(({ state }) => state === "waiting");
  const settled = approvals.items.filter(({ state }) => state !== "waiting");
  const done = (words: string) => {
    setSaid(words);
    onSettled();
  };
  return (
    <Section
      title="Waiting for approval"
      lead="Promotions of scorers, own signals and removals of labels. A second person decides: whoever proposes something cannot approve it."
    >
      <div id="approvals" aria-live="polite" className="scroll-mt-28">
        {said && <Notice className="mb-4">{said}</Notice>}
      </div>
      {waiting.length === 0 ? (
        <EmptyState title="Nothing waits for approval">
          Proposals stand here until somebody else decides them.
        </EmptyState>
      ) : (
        <div className="grid items-start gap-4 lg:grid-cols-2">
          {waiting.map((approval) => (
            <ApprovalCard
              key={approval.approvalId}
              approval={approval}
              names={names}
              personId={personId}
              maySettle={maySettle}
              onDone={done}
            />
          ))}
        </div>
      )}
      {settled.length > 0 && <SettledTable approvals={settled} names={names} />}
    </Section>
  );
}
