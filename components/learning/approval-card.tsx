"use client";
import Link from "next/link";
import { useId, useState } from "react";
import type { ApprovalView } from "@/lib/approvals/schema";
import { api } from "../api";
import { ConfirmDialog } from "../people/confirm-dialog";
import { Button } from "../ui/button";
import { Time } from "../ui/time";
import { APPROVAL_DOES, approvalTitle, type SubjectNames } from "./approval-words";
import { ReasonDialog } from "./reason-dialog";

type ApprovalCardProps = {
  approval: ApprovalView;
  names: SubjectNames;
  personId: string;
  maySettle: boolean;
  onDone: (said: string) => void;
};

type Asking = "approve" | "refuse" | "withdraw" | null;

/** One wish with its reason, before those who may settle it; who may not is told why. */
export function ApprovalCard({ approval, names, personId, maySettle, onDone }: ApprovalCardProps) {
  const [asking, setAsking] = useState<Asking>(null);
  const whyId = useId();
  const { approvalId: id, kind, proposedBy, proposedAt, reason } = approval;
  const title = approvalTitle(approval, names);
  const isOwn = proposedBy.id === personId;
  const why = whyNot(approval, personId, maySettle);
  const barred = why === null ? {} : { "aria-disabled": true, "aria-describedby": whyId };
  const ask = (what: Asking) => (why === null ? () => setAsking(what) : undefined);
  const close = () => setAsking(null);
  const done = (said: string) => () => {
    close();
    onDone(said);
  };
  return (
    <article className="flex flex-col gap-3 border border-edge bg-raised p-4">
      <header>
        <h3 className="font-strong">{title}</h3>
        <p className="text-small text-soft">
          Proposed by {proposedBy.name}, <Time at={proposedAt} />
        </p>
      </header>
      <p className="max-w-[70ch] whitespace-pre-line">{reason}</p>
      <p className="max-w-[70ch] text-small text-soft">
        Once approved: {APPROVAL_DOES[kind]}
        {"signalId" in approval.subject && (
          <>
            {" "}
            <Link href="/signals" className="underline decoration-edge underline-offset-2">
              Read its formula
            </Link>
          </>
        )}
      </p>
      <div className="flex flex-wrap items-center gap-2">
        <Button look="action" {...barred} onClick={ask("approve")}>
          Approve
        </Button>
        <Button {...barred} onClick={ask("refuse")}>
          Refuse
        </Button>
        {isOwn && <Button onClick={() => setAsking("withdraw")}>Withdraw</Button>}
        {why !== null && (
          <p id={whyId} className="text-small text-soft">
            {why}
          </p>
        )}
      </div>
      {asking === "approve" && (
        <ConfirmDialog
          title={<>{title}?</>}
          says={`What ${proposedBy.name} proposed is done at once, by your approval. ${APPROVAL_DOES[kind]}`}
          verb="Approve"
          act={() => api("POST /api/approvals/{id}/approve", { id })}
          onClose={close}
          onDone={done("Approved and done.")}
        />
      )}
      {asking === "refuse" && (
        <ReasonDialog
          title={<>Refuse this: {title}?</>}
          says="Nothing changes. The proposal stays on record as refused, with your reason."
          hint={`${proposedBy.name} reads it, and so does whoever looks later.`}
          verb="Refuse"
          act={(because) => api("POST /api/approvals/{id}/refuse", { id, reason: because })}
          onClose={close}
          onDone={done("Refused. Nothing has changed.")}
        />
      )}
      {asking === "withdraw" && (
        <ConfirmDialog
          title="Withdraw your proposal?"
          says="Nothing changes. It stays on record as withdrawn."
          verb="Withdraw"
          act={() => api("POST /api/approvals/{id}/withdraw", { id })}
          onClose={close}
          onDone={done("Your proposal is withdrawn.")}
        />
      )}
    </article>
  );
}

/** Why this person may not settle it; null for whoever may. The server holds the same rules. */
function whyNot({ proposedBy, subject }: ApprovalView, personId: string, maySettle: boolean): string | null {
  if (!maySettle) return "Supervisors and risk managers decide this.";
  if (proposedBy.id === personId) return "You proposed this; a second person decides.";
  if ("personId" in subject && subject.personId === personId)
    return "These labels are yours; somebody else decides.";
  return null;
}
