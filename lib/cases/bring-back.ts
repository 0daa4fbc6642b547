import "server-only";
import { and, eq, lte, or } from "drizzle-orm";
import { cases } from "@/db/schema/cases";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { appendTrail, type TrailEntry } from "../trail/append";
import { changeCase, type LockedCase } from "./locked-case";
import { casesChanged } from "./notify";
import { whatTimeBrings } from "./rules";

const BATCH = 100;

/** Claims whose lease has run out and cases set aside whose time has come go back to where they came from. */
export async function bringBackDueCases(ctx: Context, signal: AbortSignal): Promise<void> {
  demand(ctx, "desk.work");
  while (!signal.aborted) {
    const changed = await bringBackBatch(ctx);
    casesChanged(changed);
    if (changed.length < BATCH) return;
  }
}

async function bringBackBatch(ctx: Context): Promise<string[]> {
  const now = ctx.now();
  return inTransaction(ctx.db, async (tx) => {
    const rows = await tx
      .select()
      .from(cases)
      .where(
        or(
          and(eq(cases.state, "claimed"), lte(cases.claimExpiresAt, now)),
          and(eq(cases.state, "waiting"), lte(cases.waitUntil, now)),
        ),
      )
      .limit(BATCH)
      // Somebody is at work on a locked one: the next round looks at it again.
      .for("update", { skipLocked: true });
    const entries: TrailEntry[] = [];
    for (const row of rows) {
      const change = whatTimeBrings(row, now);
      if (!change) continue;
      const { revision } = await changeCase(tx, row, change, now);
      entries.push(entryOf(row, revision));
    }
    if (entries.length > 0) await appendTrail(ctx, tx, ...entries);
    return rows.map(({ id }) => id);
  });
}

function entryOf(row: LockedCase, revision: number): TrailEntry {
  const about = { subjectKind: "case", subjectId: row.id, caseId: row.id };
  return row.state === "claimed"
    ? { ...about, act: "case.lease_expired", facts: { revision, claimOf: row.claimedBy } }
    : { ...about, act: "case.returned", facts: { revision } };
}
