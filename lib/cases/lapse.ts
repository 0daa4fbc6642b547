import "server-only";
import { and, asc, eq, inArray, isNull, lte, ne, sql } from "drizzle-orm";
import { cases } from "@/db/schema/cases";
import { transactions } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { newId } from "../new-id";
import { appendTrail } from "../trail/append";
import { casesChanged } from "./notify";

const BATCH = 500;

/**
 * Alerts that nobody reached in their lifetime close unlabelled, and so do the cases of payments that were decided
 * together with one and then undone. Those in somebody's hands, assigned, set aside or escalated
 * stay, and so do held payments and samples: leaving samples out would bias the estimate they are drawn for.
 */
export async function lapseUnreachedCases(ctx: Context, signal: AbortSignal): Promise<void> {
  demand(ctx, "desk.work");
  while (!signal.aborted) {
    const lapsed = await lapseBatch(ctx);
    casesChanged(lapsed);
    if (lapsed.length < BATCH) return;
  }
}

async function lapseBatch(ctx: Context): Promise<string[]> {
  const now = ctx.now();
  return inTransaction(ctx.db, async (tx) => {
    const rows = await tx
      .select({ id: cases.id })
      .from(cases)
      .innerJoin(transactions, eq(transactions.id, cases.transactionId))
      .where(
        and(
          eq(cases.state, "open"),
          lte(cases.lapsesAt, now),
          isNull(cases.assignedTo),
          ne(cases.kind, "sample"),
          ne(transactions.paymentState, "held"),
        ),
      )
      .orderBy(asc(cases.lapsesAt))
      .limit(BATCH)
      .for("update", { skipLocked: true });
    const ids = rows.map(({ id }) => id);
    if (ids.length === 0) return ids;
    await tx
      .update(cases)
      .set({ state: "lapsed", revision: sql`${cases.revision} + 1`, changedAt: now })
      .where(inArray(cases.id, ids));
    await appendTrail(ctx, tx, {
      act: "cases.lapsed",
      subjectKind: "batch",
      subjectId: newId(),
      facts: { count: ids.length, caseIds: ids },
    });
    return ids;
  });
}
