"use client";
import { type FormEvent, useState } from "react";
import { Button } from "../ui/button";
import { ChoiceSet, Radio } from "../ui/choice";
import { Dialog } from "../ui/dialog";
import { Field, TextArea } from "../ui/field";
import { Time, useZone } from "../ui/time";
import { submitOnEnter } from "./submit-on-enter";
import { waitTimes } from "./wait-times";

type WaitDialogProps = {
  caseNumber: number;
  note: string;
  onNote: (note: string) => void;
  onClose: () => void;
  onWait: (until: string, note: string) => void;
};

export function WaitDialog({ caseNumber, note, onNote, onClose, onWait }: WaitDialogProps) {
  const zone = useZone();
  const [times] = useState(() => waitTimes(new Date(), zone));
  const [chosen, setChosen] = useState(0);
  const [error, setError] = useState<string | null>(null);
  const submit = (event: FormEvent) => {
    event.preventDefault();
    const time = times[chosen];
    if (note.trim() === "")
      setError("needs some text, so that whoever gets it back knows what it waited for");
    else if (time) onWait(time.until.toISOString(), note);
  };
  return (
    <Dialog
      open
      onOpenChange={onClose}
      title={`Set case ${caseNumber} aside`}
      description="It comes back by itself. Its deadline and any hold run on."
    >
      <form onSubmit={submit} className="flex flex-col gap-4">
        <ChoiceSet legend="Until">
          {times.map(({ name, until }, index) => (
            <Radio
              key={name}
              name="until"
              checked={chosen === index}
              onChange={() => setChosen(index)}
              label={
                <>
                  {name}{" "}
                  <span className="text-soft">
                    <Time at={until.toISOString()} as="short" />
                  </span>
                </>
              }
            />
          ))}
        </ChoiceSet>
        <Field label="What it waits for" error={error} hint="Enter sends, Shift+Enter begins a new line">
          <TextArea
            value={note}
            onChange={(event) => onNote(event.target.value)}
            onKeyDown={submitOnEnter}
            maxLength={4000}
          />
        </Field>
        <div className="flex justify-end gap-2">
          <Button onClick={onClose}>Keep the case</Button>
          <Button type="submit" look="action">
            Set aside
          </Button>
        </div>
      </form>
    </Dialog>
  );
}
