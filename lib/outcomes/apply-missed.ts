import "server-only";
import { eq, isNull } from "drizzle-orm";
import type { Database } from "@/db/client";
import { outcomes } from "@/db/schema/outcomes";
import { transactions } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import { labelsLearned } from "../cases/notify";
import type { Context } from "../context";
import { applyKeptOutcomes } from "./apply-kept";

const BATCH = 200;

/**
 * Applies kept outcomes whose payments are there all the same. An outcome and its payment that come in at the same
 * moment do not see one another: each transaction looks before the other has committed.
 */
export async function applyMissedOutcomes(ctx: Context, signal: AbortSignal): Promise<void> {
  demand(ctx, "outcomes.send");
  while (!signal.aborted) {
    const transactionIds = await findMissed(ctx.db);
    if (transactionIds.length === 0) return;
    await inTransaction(ctx.db, (tx) => applyKeptOutcomes(ctx, tx, transactionIds));
    labelsLearned();
  }
}

async function findMissed(db: Database): Promise<string[]> {
  const rows = await db
    .selectDistinct({ id: transactions.id })
    .from(outcomes)
    .innerJoin(transactions, eq(transactions.externalId, outcomes.externalId))
    .where(isNull(outcomes.transactionId))
    .limit(BATCH);
  return rows.map(({ id }) => id);
}
