"use client";
import { useMutation } from "@tanstack/react-query";
import type { ReactNode } from "react";
import type { ApiProblem } from "../api";
import { Field, TextArea } from "../ui/field";
import { FormDialog } from "../ui/form-dialog";
import { Notice } from "../ui/notice";

type ReasonDialogProps = {
  title: ReactNode;
  /** What will happen. */
  says: ReactNode;
  /** Who will read the reason. */
  hint: string;
  verb: string;
  act: (reason: string) => Promise<unknown>;
  onClose: () => void;
  onDone: () => void;
  /** Before the reason: what exactly the act is to be done on, and what it would do. */
  children?: ReactNode;
};

/** Asks why before an act that others will judge. */
export function ReasonDialog(props: ReasonDialogProps) {
  const { title, says, hint, verb, act, onClose, onDone, children } = props;
  const sent = useMutation<unknown, ApiProblem, string>({ mutationFn: act, onSuccess: onDone });
  const fault = sent.error?.errorAt("reason");
  return (
    <FormDialog
      title={title}
      description={says}
      verb={verb}
      busy={sent.isPending}
      onSend={(form) => sent.mutate(String(form.get("reason")))}
      onClose={onClose}
    >
      {children}
      <Field label="Reason" hint={hint} error={fault} required>
        <TextArea name="reason" maxLength={2000} />
      </Field>
      {sent.error && !fault && <Notice kind="error">{sent.error.message}</Notice>}
    </FormDialog>
  );
}
