import "server-only";
import { demandPerson } from "../auth/demand";
import { findDeciderOrThrow } from "../cases/assign";
import { casesChanged } from "../cases/notify";
import { assign } from "../cases/rules";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { changeAll } from "./lock-cases";
import type { AssignManyInput, ChangedCasesView } from "./schema";

/** Assigns cases to a person, or to nobody; somebody else's claims on them end. All or none. */
export async function assignMany(ctx: Context, input: AssignManyInput): Promise<ChangedCasesView> {
  demandPerson(ctx, "case.assign");
  const view = await writeOnce(ctx, async (tx) => {
    const now = ctx.now();
    const to = input.personId === null ? null : await findDeciderOrThrow(tx, input.personId);
    const changed = await changeAll(tx, input.caseIds, (row) => assign(row, to, now), now);
    const entries = changed.map(({ before, after }) => ({
      act: to ? "case.assigned" : "case.unassigned",
      subjectKind: "case",
      subjectId: after.id,
      caseId: after.id,
      facts: {
        revision: after.revision,
        to: to?.personId ?? null,
        from: before.assignedTo,
        claimEndedOf: after.claimedBy === before.claimedBy ? null : before.claimedBy,
      },
    }));
    if (entries.length > 0) await appendTrail(ctx, tx, ...entries);
    return { changed: changed.map(({ after }) => after.id) };
  });
  casesChanged(view.changed);
  return view;
}
