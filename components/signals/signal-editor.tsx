"use client";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import type { OwnSignalView } from "@/lib/signals/own-schema";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Field, Input, TextArea } from "../ui/field";
import { FormDialog } from "../ui/form-dialog";
import { Notice } from "../ui/notice";
import { FormulaHelp } from "./formula-help";
import { FormulaPlace } from "./formula-place";
import { numberText } from "./number-text";
import { draftOfSignal, EMPTY_DRAFT, readNumber, type SignalDraft } from "./signal-draft";
import { SignalFiguresView } from "./signal-figures";
import { usePreview } from "./use-preview";

type SignalEditorProps = {
  /** Null for a new one. */
  signal: OwnSignalView | null;
  onClose: () => void;
  onDone: (words: string) => void;
};

/** The form for a signal's draft; what it measures on recent payments stands beneath while one types. */
export function SignalEditor({ signal, onClose, onDone }: SignalEditorProps) {
  const [draft, setDraft] = useState<SignalDraft>(() => (signal ? draftOfSignal(signal) : EMPTY_DRAFT));
  const [asked, setAsked] = useState(false);
  const middle = readNumber(draft.middle);
  const reach = readNumber(draft.reach);
  const { preview, error, isBehind } = usePreview({
    formula: draft.formula,
    middle,
    reach: reach !== null && reach > 0 ? reach : null,
  });
  const save = useMutation<OwnSignalView | null, ApiProblem, { middle: number; reach: number }>({
    mutationFn: (scale) => {
      const { name, sentence, formula } = draft;
      const fields = { name, sentence, formula, ...scale };
      return signal
        ? api("PUT /api/signals/{id}", { id: signal.signalId, revision: signal.revision, ...fields })
        : api("POST /api/signals", fields);
    },
    onSuccess: () =>
      onDone(signal ? "The draft is changed." : "Defined. Propose to switch it on when it is right."),
  });
  const send = () => {
    setAsked(true);
    if (middle !== null && reach !== null) save.mutate({ middle, reach });
  };
  const set = (field: keyof SignalDraft) => (event: { target: { value: string } }) =>
    setDraft({ ...draft, [field]: event.target.value });
  const fault = (field: keyof SignalDraft) => save.error?.errorAt(field);
  const problem = preview?.problem ?? null;
  const figures = preview?.figures ?? null;
  const suggested = figures?.suggested ?? null;
  const others = save.error?.errors.every(({ path }) => !(path in draft));
  return (
    <FormDialog
      wide
      title={signal ? `Edit ${signal.name}` : "Define a signal"}
      description="A draft counts for nothing. Attributes of a person such as age, sex, religion or nationality are never a signal."
      verb={signal ? "Save the draft" : "Save as a draft"}
      busy={save.isPending}
      onSend={send}
      onClose={onClose}
    >
      <Field label="Name" hint="As it stands in the evidence." error={fault("name")} required>
        <Input value={draft.name} maxLength={80} autoComplete="off" onChange={set("name")} />
      </Field>
      <Field
        label="Sentence for reviewers"
        hint="What it measures and why it tells."
        error={fault("sentence")}
        required
      >
        <TextArea rows={2} value={draft.sentence} maxLength={400} onChange={set("sentence")} />
      </Field>
      <div className="flex flex-col gap-1.5">
        <Field
          label="Formula"
          hint="For example: amount > 250 and attributes.loyalty_years < 1"
          error={isBehind ? null : (problem?.message ?? fault("formula"))}
          required
        >
          <TextArea
            rows={3}
            value={draft.formula}
            maxLength={1000}
            spellCheck={false}
            autoCapitalize="off"
            className="font-mono"
            onChange={set("formula")}
          />
        </Field>
        {problem && !isBehind && <FormulaPlace formula={draft.formula} problem={problem} />}
        <FormulaHelp />
      </div>
      <fieldset>
        <legend className="text-small font-strong">Scale</legend>
        <p className="mb-2 text-small text-soft">
          The middle counts as 0, middle + reach as 1 and middle − reach as −1; what lies beyond stands at the
          ends.
        </p>
        <div className="flex flex-wrap items-end gap-x-6 gap-y-3">
          <Field
            label="Middle"
            error={asked && middle === null ? "needs a number" : fault("middle")}
            required
          >
            <Input
              inputMode="decimal"
              autoComplete="off"
              className="max-w-36"
              value={draft.middle}
              onChange={set("middle")}
            />
          </Field>
          <Field
            label="Reach"
            error={asked && reach === null ? "needs a number above 0" : fault("reach")}
            required
          >
            <Input
              inputMode="decimal"
              autoComplete="off"
              className="max-w-36"
              value={draft.reach}
              onChange={set("reach")}
            />
          </Field>
          {suggested && !problem && (
            <Button
              onClick={() =>
                setDraft({ ...draft, middle: String(suggested.middle), reach: String(suggested.reach) })
              }
            >
              Take {numberText(suggested.middle)} ± {numberText(suggested.reach)}, as recent payments suggest
            </Button>
          )}
        </div>
      </fieldset>
      <section aria-label="On recent payments" aria-busy={isBehind} className="border-t border-rule pt-3">
        <h3 className="mb-2 font-strong">On recent payments</h3>
        {error && <Notice kind="error">{error.message}</Notice>}
        {!figures && !error && (
          <p className="text-soft">
            {problem ? "Shown once the formula can be read." : "Write a formula to see what it measures."}
          </p>
        )}
        {figures && <SignalFiguresView figures={figures} />}
      </section>
      {others && <Notice kind="error">{save.error?.message}</Notice>}
    </FormDialog>
  );
}
