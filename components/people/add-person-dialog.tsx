"use client";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import type { Role } from "@/lib/auth/codes";
import { type ApiProblem, api } from "../api";
import { Field, Input } from "../ui/field";
import { FormDialog } from "../ui/form-dialog";
import { Notice } from "../ui/notice";
import { RoleChoices } from "./role-choices";

type AddPersonInput = Parameters<typeof addPerson>[0];
type Answer = Awaited<ReturnType<typeof addPerson>>;
const addPerson = (input: { name: string; email: string; roles: Role[]; timeZone: string }) =>
  api("POST /api/people", input);

type AddPersonDialogProps = { onClose: () => void; onDone: (answer: Answer) => void };

export function AddPersonDialog({ onClose, onDone }: AddPersonDialogProps) {
  const [roles, setRoles] = useState<Role[]>(["reviewer"]);
  const add = useMutation<Answer, ApiProblem, AddPersonInput>({ mutationFn: addPerson, onSuccess: onDone });
  const send = (form: FormData) => {
    // The adder's zone is the best guess; the person can change it.
    const { timeZone } = Intl.DateTimeFormat().resolvedOptions();
    add.mutate({ name: String(form.get("name")), email: String(form.get("email")), roles, timeZone });
  };
  const problem = add.error;
  return (
    <FormDialog
      title="Add a person"
      description="They get a one-time password, shown to you once, and choose their own when they first sign in."
      verb="Add"
      busy={add.isPending}
      onSend={send}
      onClose={onClose}
    >
      <Field label="Name" error={problem?.errorAt("name")} required>
        <Input name="name" maxLength={120} autoComplete="off" />
      </Field>
      <Field label="E-mail" error={problem?.errorAt("email")} required>
        <Input name="email" type="email" maxLength={254} autoComplete="off" />
      </Field>
      <RoleChoices roles={roles} onChange={setRoles} error={problem?.errorAt("roles")} />
      {problem && problem.errors.length === 0 && <Notice kind="error">{problem.message}</Notice>}
    </FormDialog>
  );
}
