import "server-only";
import { eq } from "drizzle-orm";
import { importChunks, imports } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { commitBatch } from "./commit-batch";
import { type ClaimedImport, giveBack, holdLease } from "./lease";
import { UnreadableFile } from "./lines";
import { type Progress, type Row, rowsOf } from "./rows";

/** Large enough that the history of a batch is read in few queries, small enough to lose little time on a crash. */
const BATCH_ROWS = 4_000;
/** A batch that fails so often does so by a fault of ours, and would for ever. */
const ATTEMPTS_AT_MOST = 5;

/**
 * Reads a claimed import to its end. Each batch commits its rows, its errors and its progress in one transaction, so
 * an import that was broken off goes on right behind the last committed row.
 * @throws LostLease when another server has taken it over meanwhile
 */
export async function runImport(
  ctx: Context,
  claimed: ClaimedImport,
  signal: AbortSignal,
  batchRows = BATCH_ROWS,
): Promise<void> {
  if (claimed.attempts > ATTEMPTS_AT_MOST) {
    const from = `behind row ${claimed.rowsDone}`;
    await finish(ctx, claimed, `Reading stopped ${from} by a fault on our side, ${ATTEMPTS_AT_MOST} times`);
    return;
  }
  const progress: Progress = { readBytes: 0 };
  // Rows before a fault of the file are in, whatever its batch lacked.
  let problem: string | null = null;
  let skip = claimed.rowsDone;
  let batch: Row[] = [];
  try {
    for await (const row of rowsOf(ctx.db, claimed, progress)) {
      if (skip > 0) {
        skip -= 1;
        continue;
      }
      batch.push(row);
      if (batch.length < batchRows) continue;
      await commitBatch(ctx, claimed, batch, progress);
      batch = [];
      if (signal.aborted) return await giveBack(ctx.db, claimed);
    }
  } catch (error) {
    if (!(error instanceof UnreadableFile)) throw error;
    problem = error.message;
  }
  if (batch.length > 0) await commitBatch(ctx, claimed, batch, progress);
  await finish(ctx, claimed, problem);
}

/** The content has served its purpose; what came of it stays. */
async function finish(ctx: Context, claimed: ClaimedImport, problem: string | null): Promise<void> {
  const state = problem === null ? "done" : "failed";
  await inTransaction(ctx.db, async (tx) => {
    await holdLease(tx, claimed, ctx.now());
    await tx
      .update(imports)
      .set({ state, problem, finishedAt: ctx.now(), leaseOwner: null, leaseExpiresAt: null })
      .where(eq(imports.id, claimed.id));
    await tx.delete(importChunks).where(eq(importChunks.importId, claimed.id));
    const [row] = await tx.select().from(imports).where(eq(imports.id, claimed.id));
    if (!row) throw new Error("An import that is held is gone");
    await appendTrail(ctx, tx, {
      act: problem === null ? "import.finished" : "import.failed",
      subjectKind: "import",
      subjectId: claimed.id,
      facts: {
        source: row.source,
        rows: row.rowsDone,
        created: row.created,
        duplicates: row.duplicates,
        rejected: row.rejected,
        casesOpened: row.casesOpened,
      },
    });
  });
}
