"use client";
import type { Ref } from "react";
import { Field, TextArea } from "../ui/field";

type NoteEditorProps = {
  note: string;
  onNote: (note: string) => void;
  editorRef: Ref<HTMLTextAreaElement>;
};

/** The note that goes with the verdict; kept on the server while it is being written. */
export function NoteEditor({ note, onNote, editorRef }: NoteEditorProps) {
  return (
    <Field label="Note" hint="Goes with the verdict, and is kept while you write. Esc goes back to the case.">
      <TextArea
        ref={editorRef}
        value={note}
        onChange={(event) => onNote(event.target.value)}
        rows={2}
        maxLength={4000}
      />
    </Field>
  );
}
