"use client";
import { type FormEvent, useState } from "react";
import type { ScorerFigures } from "@/lib/learning/learning-schema";
import { Button } from "../ui/button";
import { Field, Input, Select } from "../ui/field";
import { useZone } from "../ui/time";
import { useNowMs } from "../ui/time-left";
import { dayBefore, dayOf, type WindowFields } from "./window";

type WindowChooserProps = {
  fields: WindowFields;
  unreadable: readonly ("from" | "to")[];
  candidates: readonly ScorerFigures[];
  onChoose: (fields: WindowFields) => void;
};

const WHOLE = "whole";
const MONTH = "month";
const DAYS = "days";
const MONTH_DAYS = 30;
const NO_DAY = "is not a day like 2026-11-30";

/** Which labels the figures are over; the choice stands in the address. */
export function WindowChooser({ fields, unreadable, candidates, onChoose }: WindowChooserProps) {
  const zone = useZone();
  const nowMs = useNowMs();
  const [wantsDays, setWantsDays] = useState(false);
  const monthFrom = nowMs === null ? null : dayBefore(nowMs, MONTH_DAYS, zone);
  const chosen = wantsDays ? DAYS : choiceOf(fields, monthFrom, candidates);
  const choose = (choice: string) => {
    setWantsDays(choice === DAYS);
    if (choice === WHOLE) onChoose({ from: null, to: null });
    else if (choice === MONTH) onChoose({ from: monthFrom, to: null });
    else if (choice !== DAYS) onChoose({ from: choice, to: null });
  };
  const show = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    setWantsDays(false);
    onChoose({ from: String(form.get("from")) || null, to: String(form.get("to")) || null });
  };
  return (
    <form onSubmit={show} noValidate className="mb-4 flex flex-wrap items-end gap-3">
      <Field label="Labels looked at" className="w-full sm:w-72">
        <Select value={chosen} onChange={(event) => choose(event.target.value)}>
          <option value={WHOLE}>The whole log</option>
          <option value={MONTH}>The last {MONTH_DAYS} days</option>
          {candidates.map(({ id, name, startedAt }) => (
            <option key={id} value={startedAt}>
              Since “{name}” began
            </option>
          ))}
          <option value={DAYS}>Chosen days</option>
        </Select>
      </Field>
      {chosen === DAYS && (
        <>
          <Field label="From" className="w-40" error={unreadable.includes("from") ? NO_DAY : undefined}>
            <Input key={fields.from} name="from" type="date" defaultValue={dayOf(fields.from, zone)} />
          </Field>
          <Field
            label="To, inclusive"
            className="w-40"
            error={unreadable.includes("to") ? NO_DAY : undefined}
          >
            <Input key={fields.to} name="to" type="date" defaultValue={dayOf(fields.to, zone)} />
          </Field>
          <Button type="submit">Show</Button>
        </>
      )}
    </form>
  );
}

function choiceOf(
  { from, to }: WindowFields,
  monthFrom: string | null,
  candidates: readonly ScorerFigures[],
): string {
  if (to) return DAYS;
  if (!from) return WHOLE;
  if (from === monthFrom) return MONTH;
  return candidates.some(({ startedAt }) => startedAt === from) ? from : DAYS;
}
