"use client";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import { PERSONAL_SCOPES } from "@/lib/auth/access";
import { SCOPES, type Scope } from "@/lib/auth/codes";
import type { AddKeyView } from "@/lib/keys/schema";
import { type ApiProblem, api } from "../api";
import { Checkbox, ChoiceSet } from "../ui/choice";
import { Field, Input, Select } from "../ui/field";
import { FormDialog } from "../ui/form-dialog";
import { Notice } from "../ui/notice";

export type ActingPerson = { id: string; name: string };

const WHAT_THEY_OPEN: Readonly<Record<Scope, string>> = {
  "transactions:write": "send payments to be scored",
  "outcomes:write": "report chargebacks, recoveries and other outcomes",
  "cases:read": "read the queue and cases",
  "cases:decide": "work cases as the person the key acts for",
  "policy:write": "propose and approve policy as the person the key acts for",
  "reports:read": "read losses, policy, trail and figures",
};

type AddKeyDialogProps = {
  people: readonly ActingPerson[];
  onClose: () => void;
  onDone: (answer: AddKeyView | null) => void;
};

export function AddKeyDialog({ people, onClose, onDone }: AddKeyDialogProps) {
  const [scopes, setScopes] = useState<Scope[]>(["transactions:write"]);
  const needsPerson = scopes.some((scope) => PERSONAL_SCOPES.includes(scope));
  const add = useMutation<AddKeyView | null, ApiProblem, FormData>({
    mutationFn: (form) =>
      api("POST /api/keys", {
        name: String(form.get("name")),
        source: String(form.get("source")),
        scopes,
        ...(needsPerson && { actsForPersonId: String(form.get("actsForPersonId")) }),
      }),
    onSuccess: onDone,
  });
  const toggle = (scope: Scope, on: boolean) =>
    setScopes(SCOPES.filter((each) => (each === scope ? on : scopes.includes(each))));
  const problem = add.error;
  return (
    <FormDialog title="Add a key" verb="Add" busy={add.isPending} onSend={add.mutate} onClose={onClose}>
      <Field label="Name" error={problem?.errorAt("name")} required>
        <Input name="name" maxLength={80} autoComplete="off" />
      </Field>
      <Field
        label="Source"
        hint="Namespace of the identifiers that come in through it, such as core-banking"
        error={problem?.errorAt("source")}
        required
      >
        <Input name="source" maxLength={64} autoComplete="off" spellCheck={false} />
      </Field>
      <ChoiceSet legend="Scopes">
        {SCOPES.map((scope) => (
          <Checkbox
            key={scope}
            label={<code>{scope}</code>}
            hint={WHAT_THEY_OPEN[scope]}
            checked={scopes.includes(scope)}
            onChange={(event) => toggle(scope, event.target.checked)}
          />
        ))}
      </ChoiceSet>
      {needsPerson && (
        <Field
          label="Acts for"
          hint="With this person's rights and no more; the trail shows both"
          error={problem?.errorAt("actsForPersonId")}
          required
        >
          <Select name="actsForPersonId" defaultValue="">
            <option value="" disabled>
              Choose a person
            </option>
            {people.map(({ id, name }) => (
              <option key={id} value={id}>
                {name}
              </option>
            ))}
          </Select>
        </Field>
      )}
      {problem && <KeyProblem problem={problem} />}
    </FormDialog>
  );
}

/** What no single field shows. */
function KeyProblem({ problem }: { problem: ApiProblem }) {
  const scopes = problem.errorAt("scopes");
  if (scopes) return <Notice kind="error">Scopes: {scopes}</Notice>;
  return problem.errors.length === 0 ? <Notice kind="error">{problem.message}</Notice> : null;
}
