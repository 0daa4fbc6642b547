"use client";
import { useMutation } from "@tanstack/react-query";
import { type FormEvent, type ReactNode, useId, useState } from "react";
import type { ApiProblem } from "../api";
import { Button } from "../ui/button";
import { Dialog } from "../ui/dialog";
import { Field, TextArea } from "../ui/field";
import { Notice } from "../ui/notice";

type ReasonDialogProps = {
  title: string;
  /** What will happen. */
  says: ReactNode;
  /** Who will read the reason. */
  hint: string;
  verb: string;
  act: (reason: string) => Promise<unknown>;
  onClose: () => void;
  onDone: () => void;
  /** Between the words and the reason: what the act would do, or on what it is done. */
  children?: ReactNode;
};

/** Asks why before an act that others will judge. */
export function ReasonDialog(props: ReasonDialogProps) {
  const { title, says, hint, verb, act, onClose, onDone, children } = props;
  const [reason, setReason] = useState("");
  const formId = useId();
  const sent = useMutation<unknown, ApiProblem, string>({ mutationFn: act, onSuccess: onDone });
  const send = (event: FormEvent) => {
    event.preventDefault();
    sent.mutate(reason);
  };
  const fault = sent.error?.errorAt("reason");
  return (
    <Dialog
      open
      onOpenChange={onClose}
      title={title}
      description={says}
      footer={
        <>
          <Button onClick={onClose}>Cancel</Button>
          <Button type="submit" form={formId} look="action" busy={sent.isPending}>
            {verb}
          </Button>
        </>
      }
    >
      <form id={formId} onSubmit={send} noValidate className="flex flex-col gap-4">
        {children}
        <Field label="Reason" hint={hint} error={fault} required>
          <TextArea value={reason} maxLength={2000} onChange={(event) => setReason(event.target.value)} />
        </Field>
        {sent.error && !fault && <Notice kind="error">{sent.error.message}</Notice>}
      </form>
    </Dialog>
  );
}
