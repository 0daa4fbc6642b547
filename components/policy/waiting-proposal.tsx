"use client";
import { useState } from "react";
import { termChanges } from "@/lib/policy/changes";
import type { PolicyRecord, PolicyTerms, ScoreHistogram } from "@/lib/policy/schema";
import { api } from "../api";
import { ReasonDialog } from "../learning/reason-dialog";
import { ConfirmDialog } from "../people/confirm-dialog";
import { Button } from "../ui/button";
import { Notice } from "../ui/notice";
import { Time } from "../ui/time";
import { ApproveDialog } from "./approve-dialog";
import { ChangesTable } from "./changes-table";
import { Effect } from "./effect";
import type { Currency } from "./term-values";

type WaitingProposalProps = {
  proposal: PolicyRecord;
  /** Its place among those that wait, from 1. */
  place: number;
  newestVersion: number;
  /** Terms of the version it was made against. */
  base: PolicyTerms;
  recent: ScoreHistogram;
  currency: Currency;
  personId: string;
  mayApprove: boolean;
  onDone: (said: string) => void;
};

type Asking = "approve" | "decline" | "withdraw" | null;

/** A proposal with its reason, its differences and its effect, before those who may settle it. */
export function WaitingProposal(props: WaitingProposalProps) {
  const { proposal, place, newestVersion, base, recent, currency, personId, mayApprove, onDone } = props;
  const [asking, setAsking] = useState<Asking>(null);
  const isOwn = proposal.proposedBy?.id === personId;
  const isStale = proposal.basedOnVersion !== newestVersion;
  const close = () => setAsking(null);
  const done = (said: string) => () => {
    close();
    onDone(said);
  };
  const { policyId: id, terms } = proposal;
  return (
    <article className="flex flex-col gap-4 border border-edge bg-raised p-4">
      <header>
        <h3 className="font-strong">
          Proposed by {proposal.proposedBy?.name ?? "the system"}, <Time at={proposal.proposedAt} />
        </h3>
        <p className="mt-1 max-w-[70ch] whitespace-pre-line">{proposal.reason}</p>
      </header>
      {isStale && (
        <Notice kind="caution" title={`Made against version ${proposal.basedOnVersion}`}>
          Version {newestVersion} has been approved since. This can no longer be approved; propose it again.
        </Notice>
      )}
      <div className="grid items-start gap-x-8 gap-y-4 lg:grid-cols-2">
        <ChangesTable
          changes={termChanges(base, terms)}
          currency={currency}
          before={`Version ${proposal.basedOnVersion}`}
          after="Proposed"
          of={`proposal ${place}`}
        />
        <Effect
          recent={recent}
          currency={currency}
          now={base}
          proposed={terms}
          before={`Version ${proposal.basedOnVersion}`}
          of={`proposal ${place}`}
        />
      </div>
      <div className="flex flex-wrap items-center gap-2">
        {mayApprove && !isOwn && !isStale && (
          <Button look="action" onClick={() => setAsking("approve")}>
            Approve
          </Button>
        )}
        {mayApprove && !isOwn && <Button onClick={() => setAsking("decline")}>Decline</Button>}
        {isOwn && <Button onClick={() => setAsking("withdraw")}>Withdraw</Button>}
        {isOwn && <p className="text-small text-soft">You proposed this; somebody else approves it.</p>}
      </div>
      {asking === "approve" && (
        <ApproveDialog proposal={proposal} onClose={close} onDone={done("The change is approved.")} />
      )}
      {asking === "decline" && (
        <ReasonDialog
          title="Decline this change?"
          says="It stays in the history as declined, and the terms stay as they are."
          hint="Whoever proposed it reads this, and everybody who reads the history"
          verb="Decline"
          act={(reason) => api("POST /api/policy/proposals/{id}/decline", { id, reason })}
          onClose={close}
          onDone={done("The change is declined.")}
        />
      )}
      {asking === "withdraw" && (
        <ConfirmDialog
          title="Withdraw your proposal?"
          says="It stays in the history as withdrawn."
          verb="Withdraw"
          act={() => api("POST /api/policy/proposals/{id}/withdraw", { id })}
          onClose={close}
          onDone={done("Your proposal is withdrawn.")}
        />
      )}
    </article>
  );
}
