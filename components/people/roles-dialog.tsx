"use client";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import type { PersonView } from "@/lib/people/schema";
import { type ApiProblem, api } from "../api";
import { FormDialog } from "../ui/form-dialog";
import { Notice } from "../ui/notice";
import { RoleChoices } from "./role-choices";

type RolesDialogProps = { person: PersonView; onClose: () => void; onDone: () => void };

export function RolesDialog({ person, onClose, onDone }: RolesDialogProps) {
  const [roles, setRoles] = useState(person.roles);
  const change = useMutation<PersonView | null, ApiProblem>({
    mutationFn: () => api("POST /api/people/{id}/roles", { id: person.id, roles }),
    onSuccess: onDone,
  });
  const problem = change.error;
  return (
    <FormDialog
      title={`Roles of ${person.name}`}
      description="The change acts on the person's next request; they have to sign in again."
      verb="Set roles"
      busy={change.isPending}
      onSend={() => change.mutate()}
      onClose={onClose}
    >
      <RoleChoices roles={roles} onChange={setRoles} error={problem?.errorAt("roles")} />
      {problem && !problem.errorAt("roles") && <Notice kind="error">{problem.message}</Notice>}
    </FormDialog>
  );
}
