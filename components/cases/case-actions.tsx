"use client";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import type { CaseView } from "@/lib/cases/schema";
import { type ApiProblem, api } from "../api";
import { movedLine } from "../desk/moved-line";
import { Button, ButtonLink } from "../ui/button";
import { Notice } from "../ui/notice";
import { useNowMs } from "../ui/time-left";
import { AssignDialog } from "./assign-dialog";
import type { CaseRights } from "./case-screen";
import { CorrectionDialog } from "./correction-dialog";

type CaseActionsProps = { view: CaseView; rights: CaseRights; onDone: (words: string) => void };

/** What this person may do with the case from here; the server decides again. */
export function CaseActions({ view, rights, onDone }: CaseActionsProps) {
  const [dialog, setDialog] = useState<"assign" | "correct" | null>(null);
  const nowMs = useNowMs();
  const standing = view.decisions.find((decision) => decision.stands);
  const open = view.state !== "decided" && view.state !== "lapsed";
  const own = standing?.by.id === rights.personId;
  const undoable = own && nowMs !== null && Date.parse(standing.undoUntil) > nowMs;
  const undo = useMutation<unknown, ApiProblem>({
    mutationFn: async () => {
      const answer = await api("POST /api/cases/{id}/undo", { id: view.caseId });
      onDone(`The decision is taken back. ${movedLine(answer?.moved ?? null)}`);
    },
  });
  const close = () => setDialog(null);
  return (
    <div className="flex flex-col gap-2">
      <div className="flex flex-wrap gap-2">
        {rights.mayWork && open && (
          <ButtonLink look="action" href={`/desk?case=${view.caseId}`}>
            Take to the Desk
          </ButtonLink>
        )}
        {rights.mayAssign && open && <Button onClick={() => setDialog("assign")}>Assign</Button>}
        {undoable && (
          <Button busy={undo.isPending} onClick={() => undo.mutate()}>
            Take the decision back
          </Button>
        )}
        {rights.mayCorrect && standing && !own && (
          <Button onClick={() => setDialog("correct")}>Correct</Button>
        )}
      </div>
      {undo.error && <Notice kind="error">{undo.error.message}</Notice>}
      {dialog === "assign" && <AssignDialog view={view} onClose={close} onDone={onDone} />}
      {dialog === "correct" && standing && (
        <CorrectionDialog view={view} standing={standing} onClose={close} onDone={onDone} />
      )}
    </div>
  );
}
