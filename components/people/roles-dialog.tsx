"use client";
import { useMutation } from "@tanstack/react-query";
import { useState } from "react";
import type { PersonView } from "@/lib/people/schema";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Dialog } from "../ui/dialog";
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
    <Dialog
      open
      onOpenChange={onClose}
      title={`Roles of ${person.name}`}
      description="The change acts on the person's next request; they have to sign in again."
      footer={
        <>
          <Button onClick={onClose}>Cancel</Button>
          <Button look="action" busy={change.isPending} onClick={() => change.mutate()}>
            Set roles
          </Button>
        </>
      }
    >
      <div className="flex flex-col gap-4">
        <RoleChoices roles={roles} onChange={setRoles} error={problem?.errorAt("roles")} />
        {problem && !problem.errorAt("roles") && <Notice kind="error">{problem.message}</Notice>}
      </div>
    </Dialog>
  );
}
