import "server-only";
import { eq, sql } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { importErrors, imports } from "@/db/schema/transactions";
import type { Context } from "../context";
import { receiveTransactions } from "../transactions/receive";
import type { TransactionResult } from "../transactions/schema";
import { type ClaimedImport, holdLease } from "./lease";
import type { Progress, Row } from "./rows";

/** Keeps one statement well below the server's largest packet. */
const ERRORS_A_STATEMENT = 5_000;
const LONGEST_PATH = 120;
const LONGEST_MESSAGE = 400;

type RowError = { row: number; externalId: string | null; path: string; message: string };

/** Takes a batch's payments in, and with them, or not at all, its row errors and how far the import is. @throws LostLease */
export async function commitBatch(
  ctx: Context,
  claimed: ClaimedImport,
  batch: readonly Row[],
  progress: Progress,
): Promise<void> {
  const good = batch.filter((row) => "item" in row);
  const bad = batch.filter((row) => "fault" in row);
  await receiveTransactions(ctx, {
    source: claimed.source,
    items: good.map((row) => row.item),
    alongside: async (tx, results) => {
      await holdLease(tx, claimed, ctx.now());
      await noteErrors(tx, claimed.id, [
        ...bad.map((row) => ({ row: row.line, externalId: null, path: "", message: row.fault })),
        ...good.flatMap((row, index) => errorsOf(row.line, results[index])),
      ]);
      const count = (status: TransactionResult["status"]) =>
        results.filter((one) => one.status === status).length;
      const opened = results.filter((one) => one.status === "created" && one.caseId !== null).length;
      await tx
        .update(imports)
        .set({
          rowsDone: sql`${imports.rowsDone} + ${batch.length}`,
          created: sql`${imports.created} + ${count("created")}`,
          duplicates: sql`${imports.duplicates} + ${count("duplicate")}`,
          rejected: sql`${imports.rejected} + ${count("rejected") + bad.length}`,
          casesOpened: sql`${imports.casesOpened} + ${opened}`,
          readBytes: progress.readBytes,
          attempts: 0,
        })
        .where(eq(imports.id, claimed.id));
    },
  });
}

function errorsOf(row: number, result: TransactionResult | undefined): RowError[] {
  if (!result) throw new Error("A row of the batch has no result");
  return result.errors.map(({ path, message }) => ({
    row,
    externalId: result.externalId,
    path: path.slice(0, LONGEST_PATH),
    message: message.slice(0, LONGEST_MESSAGE),
  }));
}

async function noteErrors(tx: Tx, importId: string, errors: readonly RowError[]): Promise<void> {
  const inOrder = errors.toSorted((a, b) => a.row - b.row).map((error) => ({ ...error, importId }));
  for (let from = 0; from < inOrder.length; from += ERRORS_A_STATEMENT) {
    await tx.insert(importErrors).values(inOrder.slice(from, from + ERRORS_A_STATEMENT));
  }
}
