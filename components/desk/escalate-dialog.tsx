"use client";
import { type FormEvent, useState } from "react";
import { Button } from "../ui/button";
import { Dialog } from "../ui/dialog";
import { Field, TextArea } from "../ui/field";
import { submitOnEnter } from "./submit-on-enter";

type EscalateDialogProps = {
  caseNumber: number;
  /** What was written on the case so far. */
  note: string;
  onNote: (note: string) => void;
  onClose: () => void;
  onEscalate: (note: string) => void;
};

export function EscalateDialog({ caseNumber, note, onNote, onClose, onEscalate }: EscalateDialogProps) {
  const [error, setError] = useState<string | null>(null);
  const submit = (event: FormEvent) => {
    event.preventDefault();
    if (note.trim() === "") setError("needs some text, so that the supervisor knows why");
    else onEscalate(note);
  };
  return (
    <Dialog
      open
      onOpenChange={onClose}
      title={`Escalate case ${caseNumber}`}
      description="A supervisor decides it. Say what you found and what you could not settle."
    >
      <form onSubmit={submit} className="flex flex-col gap-4">
        <Field label="Note" error={error} hint="Enter sends, Shift+Enter begins a new line">
          <TextArea
            value={note}
            onChange={(event) => onNote(event.target.value)}
            onKeyDown={submitOnEnter}
            rows={4}
            maxLength={4000}
          />
        </Field>
        <div className="flex justify-end gap-2">
          <Button onClick={onClose}>Keep the case</Button>
          <Button type="submit" look="action">
            Escalate
          </Button>
        </div>
      </form>
    </Dialog>
  );
}
