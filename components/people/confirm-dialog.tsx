"use client";
import { useMutation } from "@tanstack/react-query";
import type { ReactNode } from "react";
import type { ApiProblem } from "../api";
import { Button } from "../ui/button";
import { Dialog } from "../ui/dialog";
import { Notice } from "../ui/notice";

type ConfirmDialogProps<Answer> = {
  title: ReactNode;
  says: string;
  verb: string;
  act: () => Promise<Answer>;
  onClose: () => void;
  onDone: (answer: Answer) => void;
};

/** Asks before an act; the focus is on the way out. */
export function ConfirmDialog<Answer>(props: ConfirmDialogProps<Answer>) {
  const { title, says, verb, act, onClose, onDone } = props;
  const confirmed = useMutation<Answer, ApiProblem>({ mutationFn: act, onSuccess: onDone });
  return (
    <Dialog
      open
      onOpenChange={onClose}
      title={title}
      description={says}
      footer={
        <>
          <Button onClick={onClose} data-first-focus="">
            Cancel
          </Button>
          <Button look="action" busy={confirmed.isPending} onClick={() => confirmed.mutate()}>
            {verb}
          </Button>
        </>
      }
    >
      {confirmed.error && <Notice kind="error">{confirmed.error.message}</Notice>}
    </Dialog>
  );
}
