import "server-only";
import { and, eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { demandPerson } from "../auth/demand";
import { casesChanged } from "../cases/notify";
import { release } from "../cases/rules";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { changeAll } from "./lock-cases";
import type { ChangedCasesView, ReleaseManyInput } from "./schema";

/** Takes claims back, of the cases named or all of one person's; half-written notes stay with their author. */
export async function releaseMany(ctx: Context, input: ReleaseManyInput): Promise<ChangedCasesView> {
  const person = demandPerson(ctx, "case.assign");
  const view = await writeOnce(ctx, async (tx) => {
    const caseIds = input.caseIds ?? (await claimedBy(tx, input.personId));
    const changed = await changeAll(
      tx,
      caseIds,
      // Of one person, a case decided or given back since the list was read is no reason to refuse the others.
      (row) => (input.personId && row.claimedBy !== input.personId ? {} : release(row, person)),
      ctx.now(),
    );
    const entries = changed.map(({ before, after }) => ({
      act: "case.released",
      subjectKind: "case",
      subjectId: after.id,
      caseId: after.id,
      facts: { revision: after.revision, claimOf: before.claimedBy },
    }));
    if (entries.length > 0) await appendTrail(ctx, tx, ...entries);
    return { changed: changed.map(({ after }) => after.id) };
  });
  casesChanged(view.changed);
  return view;
}

async function claimedBy(tx: Tx, personId: string | undefined): Promise<string[]> {
  if (personId === undefined) return [];
  const rows = await tx
    .select({ id: cases.id })
    .from(cases)
    .where(and(eq(cases.claimedBy, personId), eq(cases.state, "claimed")));
  return rows.map(({ id }) => id);
}
