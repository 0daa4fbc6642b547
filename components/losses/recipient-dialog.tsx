"use client";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import type { RecipientsView, RecipientView } from "@/lib/losses/summary-schema";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Dialog } from "../ui/dialog";
import { Field, Select } from "../ui/field";
import { Notice } from "../ui/notice";
import { hourWords, WEEKDAY_WORDS } from "./weekday-words";

type RecipientDialogProps = {
  /** Null to put somebody on the list who is not on it. */
  recipient: RecipientView | null;
  others: RecipientsView["others"];
  onClose: () => void;
  onDone: (said: string) => void;
};

const HOURS = Array.from({ length: 24 }, (_, hour) => hour);

export function RecipientDialog({ recipient, others, onClose, onDone }: RecipientDialogProps) {
  const [personId, setPersonId] = useState(recipient?.personId ?? others[0]?.personId ?? "");
  const [weekday, setWeekday] = useState(recipient?.weekday ?? 1);
  const [hour, setHour] = useState(recipient?.hour ?? 8);
  const saved = useMutation<RecipientView | null, ApiProblem>({
    mutationFn: () => api("PUT /api/summaries/recipients/{personId}", { personId, weekday, hour }),
    onSuccess: (one) =>
      onDone(`${one?.name} gets the summary on ${WEEKDAY_WORDS[weekday]} at ${hourWords(hour)}.`),
  });
  return (
    <Dialog
      open
      onOpenChange={onClose}
      title={recipient ? `When ${recipient.name} gets the summary` : "Put somebody on the list"}
      description="The day and hour are by the person's own clock. A morning that has passed this week counts from next week on."
      footer={
        <>
          <Button onClick={onClose}>Cancel</Button>
          <Button look="action" busy={saved.isPending} onClick={() => saved.mutate()}>
            Save
          </Button>
        </>
      }
    >
      <div className="flex flex-wrap gap-4">
        {recipient === null && (
          <Field label="Person" className="w-full" error={saved.error?.errorAt("personId")}>
            <Select value={personId} onChange={(event) => setPersonId(event.target.value)}>
              {others.map((one) => (
                <option key={one.personId} value={one.personId}>
                  {one.name}
                </option>
              ))}
            </Select>
          </Field>
        )}
        <Field label="Day" className="w-40">
          <Select value={weekday} onChange={(event) => setWeekday(Number(event.target.value))}>
            {Object.entries(WEEKDAY_WORDS).map(([day, name]) => (
              <option key={day} value={day}>
                {name}
              </option>
            ))}
          </Select>
        </Field>
        <Field label="Hour" className="w-28">
          <Select value={hour} onChange={(event) => setHour(Number(event.target.value))}>
            {HOURS.map((each) => (
              <option key={each} value={each}>
                {hourWords(each)}
              </option>
            ))}
          </Select>
        </Field>
      </div>
      {saved.error && (
        <Notice kind="error" className="mt-4">
          {saved.error.message}
        </Notice>
      )}
    </Dialog>
  );
}
