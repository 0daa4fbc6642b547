import "server-only";
import { Readable } from "node:stream";
import { and, asc, eq, gt, sql } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { importChunks, importErrors, imports } from "@/db/schema/transactions";
import type { Context } from "../context";
import { receiveTransactions } from "../transactions/receive";
import type { TransactionResult } from "../transactions/schema";
import { type CsvRecord, CsvRecordReader } from "./csv-records";
import { type ClaimedImport, giveBack, holdLease } from "./lease";
import { linesOf, UnreadableFile } from "./lines";
import { columnFields, headerFault, rowToItem } from "./map-row";

/** Large enough that the history of a batch is read in few queries, small enough to lose little time on a crash. */
const BATCH_ROWS = 2_000;

type Row = { line: number; item: Record<string, unknown> } | { line: number; fault: string };
type Progress = { readBytes: number };

/**
 * Reads a claimed import to its end. Each batch commits its rows, its errors and its progress in one transaction, so
 * an import that was broken off goes on right behind the last committed row.
 * @throws LostLease when another server has taken it over meanwhile
 */
export async function runImport(ctx: Context, claimed: ClaimedImport, signal: AbortSignal): Promise<void> {
  const progress: Progress = { readBytes: 0 };
  try {
    let skip = claimed.rowsDone;
    let batch: Row[] = [];
    for await (const row of rowsOf(ctx, claimed, progress)) {
      if (skip > 0) {
        skip -= 1;
        continue;
      }
      batch.push(row);
      if (batch.length < BATCH_ROWS) continue;
      await commitBatch(ctx, claimed, batch, progress);
      batch = [];
      if (signal.aborted) return await giveBack(ctx.db, claimed, ctx.now());
    }
    if (batch.length > 0) await commitBatch(ctx, claimed, batch, progress);
    await finish(ctx, claimed, "done", null);
  } catch (error) {
    if (!(error instanceof UnreadableFile)) throw error;
    await finish(ctx, claimed, "failed", error.message);
  }
}

async function* rowsOf(ctx: Context, claimed: ClaimedImport, progress: Progress): AsyncGenerator<Row> {
  let fields: (string | null)[] | null = null;
  for await (const record of recordsOf(ctx, claimed.id, progress)) {
    if (fields === null) fields = fieldsOf(record, claimed);
    else if ("fault" in record) yield record;
    else if (record.cells.length > fields.length)
      yield { line: record.line, fault: "has more cells than the header" };
    else yield { line: record.line, item: rowToItem(fields, record.cells) };
  }
  if (fields === null) throw new UnreadableFile("The file is empty");
}

function fieldsOf(header: CsvRecord, { mapping }: ClaimedImport): (string | null)[] {
  if ("fault" in header) throw new UnreadableFile(`The header ${header.fault}`);
  const fields = columnFields(header.cells, mapping);
  const fault = headerFault(fields);
  if (fault) throw new UnreadableFile(fault);
  return fields;
}

async function* recordsOf(ctx: Context, importId: string, progress: Progress): AsyncGenerator<CsvRecord> {
  const reader = new CsvRecordReader();
  const file = Readable.from(chunksOf(ctx, importId, progress));
  let first = true;
  for await (const line of linesOf(file, () => progress.readBytes)) {
    yield* reader.push(first ? line.replace(/^\uFEFF/, "") : line);
    first = false;
  }
  yield* reader.end();
}

async function* chunksOf(ctx: Context, importId: string, progress: Progress): AsyncGenerator<Buffer> {
  for (let after = -1; ; ) {
    const [chunk] = await ctx.db
      .select()
      .from(importChunks)
      .where(and(eq(importChunks.importId, importId), gt(importChunks.part, after)))
      .orderBy(asc(importChunks.part))
      .limit(1);
    if (!chunk) return;
    progress.readBytes += chunk.content.byteLength;
    yield chunk.content;
    after = chunk.part;
  }
}

async function commitBatch(
  ctx: Context,
  claimed: ClaimedImport,
  batch: Row[],
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
        ...good.flatMap((row, index) => errorsOf(row.line, results[index] as TransactionResult)),
      ]);
      const count = (status: TransactionResult["status"]) =>
        results.filter((one) => one.status === status).length;
      await tx
        .update(imports)
        .set({
          rowsDone: sql`${imports.rowsDone} + ${batch.length}`,
          created: sql`${imports.created} + ${count("created")}`,
          duplicates: sql`${imports.duplicates} + ${count("duplicate")}`,
          rejected: sql`${imports.rejected} + ${count("rejected") + bad.length}`,
          casesOpened: sql`${imports.casesOpened} + ${results.filter((one) => one.status === "created" && one.caseId).length}`,
          readBytes: progress.readBytes,
        })
        .where(eq(imports.id, claimed.id));
    },
  });
}

function errorsOf(row: number, result: TransactionResult) {
  return (result.errors ?? []).map(({ path, message }) => ({
    row,
    externalId: result.externalId,
    path: path.slice(0, 120),
    message: message.slice(0, 400),
  }));
}

async function noteErrors(
  tx: Tx,
  importId: string,
  errors: { row: number; externalId: string | null; path: string; message: string }[],
): Promise<void> {
  if (errors.length === 0) return;
  errors.sort((a, b) => a.row - b.row);
  await tx.insert(importErrors).values(errors.map((error) => ({ ...error, importId })));
}

/** The content has served its purpose; what came of it stays. */
async function finish(ctx: Context, { id }: ClaimedImport, state: "done" | "failed", problem: string | null) {
  await ctx.db.transaction(async (tx) => {
    await tx
      .update(imports)
      .set({ state, problem, finishedAt: ctx.now(), leaseOwner: null, leaseExpiresAt: null })
      .where(eq(imports.id, id));
    await tx.delete(importChunks).where(eq(importChunks.importId, id));
  });
}
