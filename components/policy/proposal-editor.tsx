"use client";
import { useMutation } from "@tanstack/react-query";
import { type FormEvent, useEffect, useRef, useState } from "react";
import { termChanges } from "@/lib/policy/changes";
import type { PolicyTerms, PolicyView } from "@/lib/policy/schema";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Field, TextArea } from "../ui/field";
import { Notice } from "../ui/notice";
import { Section } from "../ui/section";
import { ChangesTable } from "./changes-table";
import { ChannelFields } from "./channel-fields";
import { type Draft, draftOf, isUsed, readDraft } from "./draft";
import { Effect } from "./effect";
import { TermField } from "./term-field";
import { termAt } from "./term-values";
import { TERM_GROUPS } from "./terms";

type ProposalEditorProps = {
  view: PolicyView;
  /** Terms the new ones are compared with: those of the newest version. */
  base: PolicyTerms;
  /** Terms the form starts from: the same, or an earlier version's. */
  start: PolicyTerms;
  onLines: (lines: PolicyTerms | null) => void;
  onDone: () => void;
  onCancel: () => void;
};

const NO_NUMBER = "needs a number";

/** The form in which terms are changed; what changes and what that would do stand beneath while one types. */
export function ProposalEditor({ view, base, start, onLines, onDone, onCancel }: ProposalEditorProps) {
  const { baseCurrency: currency, newestVersion } = view;
  const [draft, setDraft] = useState<Draft>(() => draftOf(start, currency));
  const [reason, setReason] = useState("");
  const [asked, setAsked] = useState(false);
  const form = useRef<HTMLFormElement>(null);
  const { terms, unreadable } = readDraft(draft, currency);
  const changes = terms ? termChanges(base, terms) : [];
  const propose = useMutation<unknown, ApiProblem, PolicyTerms>({
    mutationFn: (proposed) =>
      api("POST /api/policy/proposals", { terms: proposed, reason, basedOnVersion: newestVersion }),
    onSuccess: onDone,
  });
  const problem = propose.error;
  useEffect(() => {
    if (problem) focusFirstFault(form.current);
  }, [problem]);
  const errorAt = (path: string) =>
    asked && unreadable.includes(path) ? NO_NUMBER : problem?.errorAt(`terms.${path}`);

  const change = (path: string, value: string) => {
    const next = { ...draft, [path]: value };
    setDraft(next);
    onLines(readDraft(next, currency).terms);
  };
  const send = (event: FormEvent) => {
    event.preventDefault();
    setAsked(true);
    if (terms) propose.mutate(terms);
    else focusFirstFault(form.current);
  };

  return (
    <Section
      title="Propose a change"
      lead={`Compared with version ${newestVersion}. Nothing changes until somebody else approves it.`}
    >
      <form ref={form} onSubmit={send} noValidate className="flex flex-col gap-5">
        {TERM_GROUPS.map((group) => (
          <fieldset key={group.title} className="border-t border-rule pt-4">
            <legend className="float-left w-full font-strong">{group.title}</legend>
            <p className="clear-both mb-3 text-small text-soft">{group.lead}</p>
            <div className="grid items-end gap-x-8 gap-y-4 sm:grid-cols-2 lg:grid-cols-3">
              {group.terms
                .filter((term) => isUsed(term, draft))
                .map((term) => (
                  <TermField
                    key={term.path}
                    term={term}
                    value={draft[term.path] ?? ""}
                    error={errorAt(term.path)}
                    currencyCode={currency.code}
                    onChange={change}
                  />
                ))}
            </div>
          </fieldset>
        ))}
        <ChannelFields draft={draft} errorAt={errorAt} onChange={change} />
        <div className="flex flex-col gap-4 border-t border-edge pt-4">
          <h3 className="font-strong">What would change</h3>
          {!terms && <p className="text-soft">{wrongNumbers(unreadable)}</p>}
          {terms && changes.length === 0 && <p className="text-soft">Nothing yet.</p>}
          {terms && changes.length > 0 && (
            <div className="grid items-start gap-x-8 gap-y-4 lg:grid-cols-2">
              <ChangesTable
                changes={changes}
                currency={currency}
                before={`Version ${newestVersion}`}
                after="Proposed"
                of="your proposal"
              />
              <Effect
                recent={view.recent}
                currency={currency}
                now={base}
                proposed={terms}
                before={`Version ${newestVersion}`}
                of="your proposal"
              />
            </div>
          )}
          <Field
            label="Reason"
            hint="Whoever approves it reads this first."
            error={problem?.errorAt("reason")}
            required
          >
            <TextArea
              value={reason}
              maxLength={2000}
              onChange={(event) => setReason(event.target.value)}
              className="max-w-[70ch]"
            />
          </Field>
          {problem && <Refusal problem={problem} />}
          <div className="flex flex-wrap gap-2">
            <Button type="submit" look="action" busy={propose.isPending}>
              Propose
            </Button>
            <Button onClick={onCancel}>Discard</Button>
          </div>
        </div>
      </form>
    </Section>
  );
}

function wrongNumbers(paths: readonly string[]): string {
  return `Not a number yet: ${paths.map((path) => termAt(path).label).join(", ")}.`;
}

/** Every fault by the name of its field, also of fields that are out of sight. */
function Refusal({ problem }: { problem: ApiProblem }) {
  return (
    <Notice kind="error" title={problem.message}>
      {problem.errors.length > 0 && (
        <ul className="list-inside list-disc">
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

function nameOf(path: string): string {
  if (path === "terms") return "Terms";
  return path.startsWith("terms.") ? termAt(path.slice("terms.".length)).label : "Reason";
}

/** After the errors are painted. */
function focusFirstFault(form: HTMLFormElement | null): void {
  requestAnimationFrame(() => form?.querySelector<HTMLElement>('[aria-invalid="true"]')?.focus());
}
