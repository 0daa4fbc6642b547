"use client";
import { TZDate } from "@date-fns/tz";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import type { PolicyRecord } from "@/lib/policy/schema";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { ChoiceSet, Radio } from "../ui/choice";
import { Dialog } from "../ui/dialog";
import { Field, Input } from "../ui/field";
import { Notice } from "../ui/notice";
import { useZone } from "../ui/time";

type ApproveDialogProps = { proposal: PolicyRecord; onClose: () => void; onDone: () => void };

/** Asks from when on the new version is in force. */
export function ApproveDialog({ proposal, onClose, onDone }: ApproveDialogProps) {
  const [later, setLater] = useState(false);
  const [moment, setMoment] = useState("");
  const zone = useZone();
  const approve = useMutation<unknown, ApiProblem, string | null>({
    mutationFn: (effectiveAt) =>
      api("POST /api/policy/proposals/{id}/approve", { id: proposal.policyId, effectiveAt }),
    onSuccess: onDone,
  });
  const problem = approve.error;
  const send = () => approve.mutate(later ? instantOf(moment, zone) : null);
  return (
    <Dialog
      open
      onOpenChange={onClose}
      title="Approve this change?"
      description={`It becomes the next version, by your approval of what ${proposal.proposedBy?.name ?? "the system"} proposed.`}
      footer={
        <>
          <Button onClick={onClose} data-first-focus="">
            Cancel
          </Button>
          <Button
            look="action"
            busy={approve.isPending}
            aria-disabled={later && !moment}
            onClick={later && !moment ? undefined : send}
          >
            Approve
          </Button>
        </>
      }
    >
      <div className="flex flex-col gap-3">
        <ChoiceSet legend="In force">
          <Radio name="from" label="At once" checked={!later} onChange={() => setLater(false)} />
          <Radio name="from" label="From a later moment" checked={later} onChange={() => setLater(true)} />
        </ChoiceSet>
        {later && (
          <Field label={`Moment (${zone})`} error={problem?.errorAt("effectiveAt")}>
            <Input
              type="datetime-local"
              className="max-w-64"
              value={moment}
              onChange={(event) => setMoment(event.target.value)}
            />
          </Field>
        )}
        {problem && !problem.errorAt("effectiveAt") && <Notice kind="error">{problem.message}</Notice>}
      </div>
    </Dialog>
  );
}

/** A wall-clock time in the person's zone, as the instant it stands for. */
function instantOf(wallClock: string, zone: string): string {
  const [day = "", clock = ""] = wallClock.split("T");
  const [year = 0, month = 1, date = 1] = day.split("-").map(Number);
  const [hour = 0, minute = 0] = clock.split(":").map(Number);
  return new Date(new TZDate(year, month - 1, date, hour, minute, zone).getTime()).toISOString();
}
