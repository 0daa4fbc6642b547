"use client";
import { useMutation } from "@tanstack/react-query";
import type { OwnSignalView } from "@/lib/signals/own-schema";
import { type ApiProblem, api } from "../api";
import { ReasonDialog } from "../learning/reason-dialog";
import { FormDialog } from "../ui/form-dialog";
import { Notice } from "../ui/notice";
import type { OwnAct } from "./own-card";

type OwnActDialogProps = {
  signal: OwnSignalView;
  act: OwnAct;
  onClose: () => void;
  onDone: (words: string) => void;
};

export function OwnActDialog({ signal, act, onClose, onDone }: OwnActDialogProps) {
  if (act === "archive") return <PutAwayDialog signal={signal} onClose={onClose} onDone={onDone} />;
  return (
    <ReasonDialog
      title={`Propose to switch ${act}: ${signal.name}`}
      says={
        act === "on"
          ? "Once somebody else approves it, the scorer learns every label again with this signal. Its formula then stands for good. Waiting cases are scored anew; no payment changes."
          : "Once somebody else approves it, the scorer learns every label again without this signal. Waiting cases are scored anew; no payment changes."
      }
      hint="Whoever approves it reads this first."
      verb="Propose"
      act={(reason) => api("POST /api/signals/{id}/switch", { id: signal.signalId, to: act, reason })}
      onClose={onClose}
      onDone={() => onDone("Proposed. It waits for somebody else to approve it.")}
    >
      <p className="overflow-x-auto rounded-edge border border-rule bg-raised px-2 py-1.5 font-mono text-small break-words whitespace-pre-wrap">
        {signal.formula}
      </p>
    </ReasonDialog>
  );
}

function PutAwayDialog({ signal, onClose, onDone }: Omit<OwnActDialogProps, "act">) {
  const { signalId, revision, name } = signal;
  const away = useMutation<unknown, ApiProblem>({
    mutationFn: () => api("POST /api/signals/{id}/archive", { id: signalId, revision }),
    onSuccess: () => onDone(`${name} is put away.`),
  });
  return (
    <FormDialog
      title={`Put away: ${name}`}
      description="It leaves this page and cannot be switched on again. Past scores that it took part in still name it."
      verb="Put away"
      busy={away.isPending}
      onSend={() => away.mutate()}
      onClose={onClose}
    >
      {away.error && <Notice kind="error">{away.error.message}</Notice>}
    </FormDialog>
  );
}
