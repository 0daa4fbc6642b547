"use client";
import { useMutation, useQuery } from "@tanstack/react-query";
import { useState } from "react";
import type { CaseView } from "@/lib/cases/schema";
import { type ApiProblem, api } from "../api";
import { Field, Select } from "../ui/field";
import { FormDialog } from "../ui/form-dialog";
import { Notice } from "../ui/notice";

type AssignDialogProps = { view: CaseView; onClose: () => void; onDone: (words: string) => void };

export function AssignDialog({ view, onClose, onDone }: AssignDialogProps) {
  const floor = useQuery({
    queryKey: ["floor"],
    queryFn: ({ signal }) => api("GET /api/floor", {}, { signal }),
  });
  const [chosen, setChosen] = useState(view.assignedTo?.id ?? "");
  const people = floor.data?.people ?? [];
  const assign = useMutation<unknown, ApiProblem>({
    mutationFn: () => api("POST /api/cases/{id}/assign", { id: view.caseId, personId: chosen || null }),
    onSuccess: () => {
      const name = people.find((person) => person.id === chosen)?.name;
      onDone(name ? `The case is assigned to ${name}.` : "The case is assigned to nobody.");
      onClose();
    },
  });
  const problem = assign.error ?? floor.error;
  return (
    <FormDialog
      title={`Assign case ${view.number}`}
      description="Only this person is served the case from then on. A claim of somebody else ends."
      verb="Assign"
      wayOut="Leave it"
      busy={assign.isPending}
      onSend={() => assign.mutate()}
      onClose={onClose}
    >
      <Field label="To">
        <Select value={chosen} onChange={(event) => setChosen(event.target.value)}>
          <option value="">Nobody: whoever is next</option>
          {people.map((person) => (
            <option key={person.id} value={person.id}>
              {person.name}, {person.assigned} assigned
            </option>
          ))}
        </Select>
      </Field>
      {problem && <Notice kind="error">{problem.message}</Notice>}
    </FormDialog>
  );
}
