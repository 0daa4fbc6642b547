"use client";
import { useMutation } from "@tanstack/react-query";
import { type FormEvent, useState } from "react";
import { type ApiProblem, api } from "../api";
import { Button } from "../ui/button";
import { Field, TextArea } from "../ui/field";

type NoteFormProps = { caseId: string; onDone: (words: string) => void };

export function NoteForm({ caseId, onDone }: NoteFormProps) {
  const [body, setBody] = useState("");
  const add = useMutation<unknown, ApiProblem>({
    mutationFn: () => api("POST /api/cases/{id}/notes", { id: caseId, body }),
    onSuccess: () => {
      setBody("");
      onDone("The note is on the case.");
    },
  });
  const submit = (event: FormEvent) => {
    event.preventDefault();
    if (!add.isPending) add.mutate();
  };
  return (
    <form onSubmit={submit} className="flex flex-col gap-3">
      <Field label="New note" error={add.error ? (add.error.errorAt("body") ?? add.error.message) : null}>
        <TextArea value={body} onChange={(event) => setBody(event.target.value)} maxLength={4000} />
      </Field>
      <div>
        <Button type="submit" busy={add.isPending}>
          Add the note
        </Button>
      </div>
    </form>
  );
}
