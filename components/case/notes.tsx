import type { CaseView } from "@/lib/cases/schema";
import { Time } from "../ui/time";

/** Notes on the case, as they were written. */
export function Notes({ notes }: { notes: CaseView["notes"] }) {
  if (notes.length === 0) return null;
  return (
    <ul className="flex flex-col gap-2">
      {notes.map((note) => (
        <li key={`${note.writtenAt}-${note.by.id}`} className="border-l-2 border-rule pl-3">
          <p className="whitespace-pre-wrap">{note.body}</p>
          <p className="text-small text-soft">
            {note.by.name}, <Time at={note.writtenAt} />
          </p>
        </li>
      ))}
    </ul>
  );
}
