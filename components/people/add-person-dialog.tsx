"use client";
import { useMutation } from "@tanstack/react-query";
import { type FormEvent, useId, useState } from "react";
import type { Role } from "@/lib/auth/codes";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Dialog } from "../ui/dialog";
import { Field, Input } from "../ui/field";
import { Notice } from "../ui/notice";
import { RoleChoices } from "./role-choices";

type AddPersonInput = Parameters<typeof addPerson>[0];
type Answer = Awaited<ReturnType<typeof addPerson>>;
const addPerson = (input: { name: string; email: string; roles: Role[]; timeZone: string }) =>
  api("POST /api/people", input);

type AddPersonDialogProps = { onClose: () => void; onDone: (answer: Answer) => void };

export function AddPersonDialog({ onClose, onDone }: AddPersonDialogProps) {
  const [roles, setRoles] = useState<Role[]>(["reviewer"]);
  const formId = useId();
  const add = useMutation<Answer, ApiProblem, AddPersonInput>({ mutationFn: addPerson, onSuccess: onDone });
  const send = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    const form = new FormData(event.currentTarget);
    // The adder's zone is the best guess; the person can change it.
    const { timeZone } = Intl.DateTimeFormat().resolvedOptions();
    add.mutate({ name: String(form.get("name")), email: String(form.get("email")), roles, timeZone });
  };
  const problem = add.error;
  return (
    <Dialog
      open
      onOpenChange={onClose}
      title="Add a person"
      description="They get a one-time password, shown to you once, and choose their own when they first sign in."
      footer={
        <>
          <Button onClick={onClose}>Cancel</Button>
          <Button type="submit" form={formId} look="action" busy={add.isPending}>
            Add
          </Button>
        </>
      }
    >
      <form id={formId} onSubmit={send} className="flex flex-col gap-4">
        <Field label="Name" error={problem?.errorAt("name")} required>
          <Input name="name" maxLength={120} autoComplete="off" />
        </Field>
        <Field label="E-mail" error={problem?.errorAt("email")} required>
          <Input name="email" type="email" maxLength={254} autoComplete="off" />
        </Field>
        <RoleChoices roles={roles} onChange={setRoles} error={problem?.errorAt("roles")} />
        {problem && problem.errors.length === 0 && <Notice kind="error">{problem.message}</Notice>}
      </form>
    </Dialog>
  );
}
