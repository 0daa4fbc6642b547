"use client";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import type { CandidateView } from "@/lib/learning/learning-schema";
import { type ApiProblem, api } from "../api";
import { ChoiceSet, Radio } from "../ui/choice";
import { Field, Input } from "../ui/field";
import { FormDialog } from "../ui/form-dialog";
import { Notice } from "../ui/notice";
import {
  CANDIDATE_METHODS,
  type CandidateMethod,
  OPTION_RANGES,
  type OptionDraft,
  optionFields,
  readOptions,
} from "./candidate-draft";
import { METHOD_WORDS, OPTION_WORDS, type OptionKey } from "./method-words";

type CandidateDialogProps = { onClose: () => void; onDone: (name: string) => void };

/** Asks for a scorer that shall predict and learn beside the one in use. */
export function CandidateDialog({ onClose, onDone }: CandidateDialogProps) {
  const [name, setName] = useState("");
  const [method, setMethod] = useState<CandidateMethod>("improper");
  const [draft, setDraft] = useState<OptionDraft>({});
  const [asked, setAsked] = useState(false);
  const { options, unreadable } = readOptions(method, draft);
  const add = useMutation<CandidateView | null, ApiProblem>({
    mutationFn: () => api("POST /api/scorers", { name, method, options }),
    onSuccess: () => onDone(name.trim()),
  });
  const send = () => {
    setAsked(true);
    if (unreadable.length === 0) add.mutate();
  };
  const problem = add.error;
  const errorAt = (key: OptionKey) =>
    asked && unreadable.includes(key) ? "needs a number" : problem?.errorAt(`options.${key}`);
  return (
    <FormDialog
      wide
      title="Run another beside it"
      description="It predicts every label before it learns from it, from the first label on, and gives no scores. Payments and cases are not touched."
      verb="Run it"
      busy={add.isPending}
      onSend={send}
      onClose={onClose}
    >
      <Field label="Name" hint="How it is called in every table." error={problem?.errorAt("name")} required>
        <Input
          value={name}
          maxLength={80}
          autoComplete="off"
          className="max-w-80"
          onChange={(event) => setName(event.target.value)}
        />
      </Field>
      <ChoiceSet legend="Method">
        {CANDIDATE_METHODS.map((each) => (
          <Radio
            key={each}
            name="method"
            label={METHOD_WORDS[each].name}
            hint={METHOD_WORDS[each].does}
            checked={method === each}
            onChange={() => setMethod(each)}
          />
        ))}
      </ChoiceSet>
      <fieldset>
        <legend className="text-small font-strong">Settings</legend>
        <p className="mb-3 text-small text-soft">A field left empty takes the method's usual value.</p>
        <div className="grid items-end gap-x-6 gap-y-4 sm:grid-cols-2">
          {optionFields(method).map(({ key, initial }) => (
            <Field
              key={key}
              label={OPTION_WORDS[key].name}
              hint={
                <>
                  {OPTION_WORDS[key].does} {OPTION_RANGES[key]}; usually {initial}.
                </>
              }
              error={errorAt(key)}
            >
              <Input
                inputMode="decimal"
                autoComplete="off"
                className="max-w-32 text-right"
                value={draft[key] ?? ""}
                onChange={(event) => setDraft({ ...draft, [key]: event.target.value })}
              />
            </Field>
          ))}
        </div>
      </fieldset>
      {problem && <Refusal problem={problem} />}
    </FormDialog>
  );
}

/** What no field of the form shows. */
function Refusal({ problem }: { problem: ApiProblem }) {
  const shown = (path: string) => path === "name" || path.startsWith("options.");
  const others = problem.errors.filter(({ path }) => !shown(path));
  if (problem.errors.length > 0 && others.length === 0) return null;
  return <Notice kind="error">{others[0]?.message ?? problem.message}</Notice>;
}
