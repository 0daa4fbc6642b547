import "server-only";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { forbidden } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { addNote } from "./add-note";
import { lockCaseOrThrow, stateView } from "./locked-case";
import type { CaseStateView } from "./schema";
import { maySee, readerOf } from "./visibility";

/** Adds a note to a case one may see, decided ones too. A note changes nothing that a verdict stands on. */
export async function noteOnCase(ctx: Context, input: { id: string; body: string }): Promise<CaseStateView> {
  const person = demandPerson(ctx, "desk.work");
  return writeOnce(ctx, async (tx) => {
    const row = await lockCaseOrThrow(tx, input.id);
    if (!maySee(row, readerOf(ctx.actor))) throw forbidden("This case is not yours");
    const noteId = await addNote(tx, {
      caseId: row.id,
      personId: person.personId,
      body: input.body,
      now: ctx.now(),
    });
    await appendTrail(ctx, tx, {
      act: "case.noted",
      subjectKind: "note",
      subjectId: noteId,
      caseId: row.id,
      facts: { characters: input.body.length },
    });
    return stateView(row);
  });
}
