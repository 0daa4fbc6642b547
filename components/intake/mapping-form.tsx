"use client";
import { type FormEvent, useEffect, useRef } from "react";
import type { ImportField } from "@/lib/imports/fields";
import type { ApiProblem } from "../api";
import { Button } from "../ui/button";
import { Field, Input } from "../ui/field";
import { Notice } from "../ui/notice";
import { ColumnField } from "./column-field";
import { doubledTargets, missingFields, sharedNames, type Target } from "./columns";
import { fieldWords } from "./field-words";
import { sizeWords } from "./import-words";
import type { Chosen } from "./use-upload";

type MappingFormProps = {
  chosen: Chosen;
  fields: readonly ImportField[];
  problem: ApiProblem | null;
  onChange: (changes: Partial<Pick<Chosen, "targets" | "source">>) => void;
  onSend: (chosen: Chosen) => void;
  onStartOver: () => void;
};

/** What each column of the chosen file means, and whose references it holds. */
export function MappingForm({ chosen, fields, problem, onChange, onSend, onStartOver }: MappingFormProps) {
  const { file, columns, targets, source } = chosen;
  const headingRef = useRef<HTMLHeadingElement>(null);
  useEffect(() => headingRef.current?.focus(), []);
  const missing = missingFields(targets, fields);
  const doubled = doubledTargets(targets);
  const shared = sharedNames(columns.map(({ name }) => name));
  const isReady = missing.length === 0 && doubled.length === 0;
  const setTarget = (at: number, target: Target) => onChange({ targets: targets.with(at, target) });
  const send = (event: FormEvent) => {
    event.preventDefault();
    if (isReady) onSend(chosen);
  };
  return (
    <form onSubmit={send} className="flex flex-col gap-5">
      <div>
        <h3 ref={headingRef} tabIndex={-1} className="font-strong outline-none">
          What the columns of {file.name} mean
        </h3>
        <p className="text-small text-soft">
          {sizeWords(file.size)}. Beneath each name stand the first values of its column.
        </p>
      </div>
      <MappingStanding missing={missing} doubled={doubled} />
      <div className="grid gap-x-6 gap-y-4 sm:grid-cols-2 lg:grid-cols-3">
        {columns.map((column, index) => (
          <ColumnField
            // biome-ignore lint/suspicious/noArrayIndexKey: columns have no other identity, and names may repeat
            key={index}
            column={column}
            place={index + 1}
            target={targets[index] ?? null}
            fields={fields}
            onChange={(target) => setTarget(index, target)}
            nameIsShared={shared.has(column.name)}
            targetIsTaken={doubled.includes(targets[index] ?? "")}
          />
        ))}
      </div>
      <Field
        label="Source"
        hint="Whose references these are, such as core-banking. A payment counts as known already when its source and reference are."
        error={problem?.errorAt("source")}
        required
        className="max-w-md"
      >
        <Input
          value={source}
          onChange={(event) => onChange({ source: event.target.value })}
          maxLength={64}
          pattern="[A-Za-z0-9_.\-]+"
          title="Letters, digits, dots, hyphens and underscores"
          autoComplete="off"
          spellCheck={false}
        />
      </Field>
      {problem && !problem.errorAt("source") && (
        <Notice kind="error" title="The file was not taken in">
          {[problem.message, ...problem.errors.map(({ path, message }) => `${path} ${message}`)].join(". ")}
        </Notice>
      )}
      <div className="flex flex-wrap gap-2">
        <Button type="submit" look="action" aria-disabled={!isReady}>
          Send the file
        </Button>
        <Button look="quiet" onClick={onStartOver}>
          Choose another file
        </Button>
      </div>
    </form>
  );
}

type MappingStandingProps = { missing: readonly string[]; doubled: readonly string[] };

/** What is still to do before the file can be sent, read out as it changes. */
function MappingStanding({ missing, doubled }: MappingStandingProps) {
  const isReady = missing.length === 0 && doubled.length === 0;
  return (
    <div
      role="status"
      className={`border-l-4 bg-raised px-3 py-2 ${isReady ? "border-l-accent" : "border-l-edge"}`}
    >
      {isReady && <p>Every required field has its column.</p>}
      {missing.length > 0 && (
        <>
          <p className="font-strong">Still without a column</p>
          <ul className="list-inside list-disc">
            {missing.map((field) => (
              <li key={field}>{fieldWords(field)}</li>
            ))}
          </ul>
        </>
      )}
      {doubled.length > 0 && (
        <p>
          More than one column stands for {doubled.map(fieldWords).join(", ")}. Leave all but one of them out.
        </p>
      )}
    </div>
  );
}
