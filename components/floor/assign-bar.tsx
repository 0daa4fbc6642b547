"use client";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import type { ChangedCasesView, FloorCase, FloorPerson } from "@/lib/floor/schema";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Field, Select } from "../ui/field";
import { Notice } from "../ui/notice";
import { cases } from "./people-table";

type AssignBarProps = {
  selected: readonly string[];
  items: readonly FloorCase[];
  people: readonly FloorPerson[];
  onClear: () => void;
  onDone: (said: string) => void;
};

type Act = { said: (count: number) => string; call: () => Promise<ChangedCasesView | null> };

/** What can be done with the chosen cases, all of them or none. */
export function AssignBar({ selected, items, people, onClear, onDone }: AssignBarProps) {
  const [personId, setPersonId] = useState("");
  // The ids are kept with the refusal: its lines point into them.
  const [asked, setAsked] = useState<readonly string[]>([]);
  const act = useMutation<ChangedCasesView | null, ApiProblem, Act>({
    mutationFn: ({ call }) => call(),
    onSuccess: (answer, { said }) => {
      onClear();
      onDone(said(answer?.changed.length ?? 0));
    },
  });
  const caseIds = [...selected];
  const run = (one: Act) => {
    setAsked(caseIds);
    act.mutate(one);
  };
  const assign = (to: string | null, name: string) =>
    run({
      call: () => api("POST /api/floor/assign", { caseIds, personId: to }),
      said: (count) =>
        count === 0 ? `They were with ${name} already.` : `${cases(count)} assigned to ${name}.`,
    });
  const none = selected.length === 0;
  const person = people.find(({ id }) => id === personId);
  return (
    <div className="top-0 z-10 mb-2 border-y border-rule bg-paper py-2 md:sticky">
      <div className="flex flex-wrap items-end gap-2">
        <p aria-live="polite" className="min-h-9 content-center pr-2 tabular-nums">
          {none ? "No case chosen" : `${cases(selected.length)} chosen`}
        </p>
        <Field label="Assign to" className="w-48">
          <Select value={personId} onChange={(event) => setPersonId(event.target.value)}>
            <option value="">Choose a person</option>
            {people.map(({ id, name }) => (
              <option key={id} value={id}>
                {name}
              </option>
            ))}
          </Select>
        </Field>
        <Button
          look="action"
          disabled={none || !person}
          busy={act.isPending}
          onClick={() => person && assign(person.id, person.name)}
        >
          Assign
        </Button>
        <Button disabled={none} busy={act.isPending} onClick={() => assign(null, "nobody")}>
          Assign to nobody
        </Button>
        <Button
          disabled={none}
          busy={act.isPending}
          onClick={() =>
            run({
              call: () => api("POST /api/floor/release", { caseIds }),
              said: (count) => `${cases(count)} taken back.`,
            })
          }
        >
          Take back claims
        </Button>
        {!none && (
          <Button look="quiet" onClick={onClear}>
            Choose none
          </Button>
        )}
      </div>
      {act.error && <Refusal problem={act.error} caseIds={asked} items={items} />}
    </div>
  );
}

type RefusalProps = { problem: ApiProblem; caseIds: readonly string[]; items: readonly FloorCase[] };

/** Which cases refused and why, by their numbers. */
function Refusal({ problem, caseIds, items }: RefusalProps) {
  const nameOf = (path: string) => {
    const caseId = caseIds[Number(/^caseIds\.(\d+)$/.exec(path)?.[1])];
    const item = items.find((each) => each.caseId === caseId);
    return item ? `Case ${item.number}` : path;
  };
  return (
    <Notice kind="error" title={problem.message} className="mt-2">
      {problem.errors.length > 0 && (
        <ul className="max-h-48 list-inside list-disc overflow-y-auto">
          {problem.errors.map(({ path, message }) => (
            <li key={path}>
              {nameOf(path)}: {message}
            </li>
          ))}
        </ul>
      )}
    </Notice>
  );
}
