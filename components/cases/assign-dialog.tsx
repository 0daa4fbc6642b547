"use client";
import { useMutation, useQuery } from "@tanstack/react-query";
import { type FormEvent, useState } from "react";
import type { CaseView } from "@/lib/cases/schema";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Dialog } from "../ui/dialog";
import { Field, Select } from "../ui/field";
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
  const submit = (event: FormEvent) => {
    event.preventDefault();
    if (!assign.isPending) assign.mutate();
  };
  const problem = assign.error ?? floor.error;
  return (
    <Dialog
      open
      onOpenChange={onClose}
      title={`Assign case ${view.number}`}
      description="Only this person is served the case from then on. A claim of somebody else ends."
    >
      <form onSubmit={submit} className="flex flex-col gap-4">
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
        <div className="flex justify-end gap-2">
          <Button onClick={onClose}>Leave it</Button>
          <Button type="submit" look="action" busy={assign.isPending}>
            Assign
          </Button>
        </div>
      </form>
    </Dialog>
  );
}
