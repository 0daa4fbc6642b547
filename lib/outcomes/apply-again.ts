import "server-only";
import { and, asc, eq, isNotNull } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { outcomes } from "@/db/schema/outcomes";
import { applyOutcomes, lockPayments } from "./apply";

/**
 * Lets the outcomes of a payment speak anew whose verdict has been taken back. One that only confirmed the verdict
 * left nothing of its own in the label log or the ledger, and would be lost with it.
 * The caller has locked the case, and has stored the scorer's state.
 */
export async function applyOutcomesAgain(tx: Tx, now: Date, transactionId: string): Promise<void> {
  const rows = await tx
    .select()
    .from(outcomes)
    .where(and(eq(outcomes.transactionId, transactionId), isNotNull(outcomes.appliedAt)))
    .orderBy(asc(outcomes.id));
  if (rows.length === 0) return;
  const items = rows.map((row) => ({ ...row, outcomeId: row.id, transactionId }));
  await applyOutcomes(tx, now, items, await lockPayments(tx, [transactionId]));
}
