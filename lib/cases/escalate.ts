import "server-only";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { addNote } from "./add-note";
import { changeCase, lockCaseOrThrow, stateView } from "./locked-case";
import { casesChanged } from "./notify";
import { escalate } from "./rules";
import type { CaseStateView } from "./schema";

/** Hands the case in hand to the supervisors, with a note that says why. */
export async function escalateCase(
  ctx: Context,
  input: { id: string; note: string },
): Promise<CaseStateView> {
  const person = demandPerson(ctx, "desk.work");
  const view = await writeOnce(ctx, async (tx) => {
    const now = ctx.now();
    const row = await lockCaseOrThrow(tx, input.id);
    const escalated = await changeCase(tx, row, escalate(row, person, now), now);
    const noteId = await addNote(tx, { caseId: row.id, personId: person.personId, body: input.note, now });
    await appendTrail(ctx, tx, {
      act: "case.escalated",
      subjectKind: "case",
      subjectId: row.id,
      caseId: row.id,
      facts: { revision: escalated.revision, noteId },
    });
    return stateView(escalated);
  });
  casesChanged([view.caseId]);
  return view;
}
