import "server-only";
import { Readable } from "node:stream";
import { and, asc, eq, gt } from "drizzle-orm";
import type { Database } from "@/db/client";
import { importChunks } from "@/db/schema/transactions";
import { type CsvRecord, CsvRecordReader } from "./csv-records";
import type { ClaimedImport } from "./lease";
import { linesOf, UnreadableFile } from "./lines";
import { columnFields, headerFault, rowToItem } from "./map-row";

/** A row behind the header, as an item of the API or with what is wrong with it. */
export type Row = { line: number; item: Record<string, unknown> } | { line: number; fault: string };
/** How much of the file, as it was sent, has been read. */
export type Progress = { readBytes: number };

/** Rows of an uploaded file, in order, read as they are asked for. @throws UnreadableFile */
export async function* rowsOf(db: Database, claimed: ClaimedImport, progress: Progress): AsyncGenerator<Row> {
  let fields: (string | null)[] | null = null;
  for await (const record of recordsOf(db, claimed.id, progress)) {
    if (fields === null) fields = fieldsOf(record, claimed);
    else if ("fault" in record) yield record;
    else yield rowOf(record.line, fields, record.cells);
  }
  if (fields === null) throw new UnreadableFile("The file is empty");
}

function rowOf(line: number, fields: readonly (string | null)[], cells: readonly string[]): Row {
  // Of a row that was cut off the amount, too, may have lost its end (RFC 4180, section 2, rule 4).
  if (cells.length !== fields.length)
    return { line, fault: `has ${cells.length} cells, the header ${fields.length}` };
  return { line, item: rowToItem(fields, cells) };
}

function fieldsOf(header: CsvRecord, { mapping }: ClaimedImport): (string | null)[] {
  if ("fault" in header) throw new UnreadableFile(`The header ${header.fault}`);
  const fields = columnFields(header.cells, mapping);
  const fault = headerFault(fields);
  if (fault) throw new UnreadableFile(fault);
  return fields;
}

async function* recordsOf(db: Database, importId: string, progress: Progress): AsyncGenerator<CsvRecord> {
  const reader = new CsvRecordReader();
  const file = Readable.from(chunksOf(db, importId, progress));
  let first = true;
  for await (const line of linesOf(file, () => progress.readBytes)) {
    yield* reader.push(first ? line.replace(/^\uFEFF/, "") : line);
    first = false;
  }
  yield* reader.end();
}

async function* chunksOf(db: Database, importId: string, progress: Progress): AsyncGenerator<Buffer> {
  for (let after = -1; ; ) {
    const [chunk] = await db
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
