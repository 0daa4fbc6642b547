import "server-only";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { changeCase, lockCaseOrThrow, stateView } from "./locked-case";
import { casesChanged } from "./notify";
import { release } from "./rules";
import type { CaseStateView } from "./schema";

/** Gives one's own claim back; a supervisor gives back anybody's. Half-written notes stay with their author. */
export async function releaseCase(ctx: Context, input: { id: string }): Promise<CaseStateView> {
  const person = demandPerson(ctx, "desk.work");
  const view = await writeOnce(ctx, async (tx) => {
    const row = await lockCaseOrThrow(tx, input.id);
    const released = await changeCase(tx, row, release(row, person), ctx.now());
    await appendTrail(ctx, tx, {
      act: "case.released",
      subjectKind: "case",
      subjectId: row.id,
      caseId: row.id,
      facts: { revision: released.revision, claimOf: row.claimedBy },
    });
    return stateView(released);
  });
  casesChanged([view.caseId]);
  return view;
}
