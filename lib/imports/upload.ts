import "server-only";
import { Readable } from "node:stream";
import busboy, { type BusboyHeaders } from "@fastify/busboy";
import { eq } from "drizzle-orm";
import type { Database } from "@/db/client";
import { importChunks, imports } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { invalid, KnownError } from "../errors";
import { fieldErrors } from "../field-errors";
import { newId } from "../new-id";
import { appendTrail } from "../trail/append";
import { readImportOrThrow } from "./read";
import { type ImportView, UploadFields } from "./schema";

const LARGEST_FILE_BYTES = 512 * 1024 ** 2;
const CHUNK_BYTES = 1024 ** 2;

type Received = { fileName: string; sizeBytes: number; fields: Record<string, string> };

/**
 * Takes a file in, piece by piece into the database, where any server finds it, and queues it for reading.
 * A transfer that breaks off leaves an import marked as failed and nothing of its content.
 */
export async function uploadImport(ctx: Context, _input: object, request: Request): Promise<ImportView> {
  const person = demandPerson(ctx, "intake.upload");
  const id = newId();
  await ctx.db.insert(imports).values({
    id,
    source: "csv",
    fileName: "",
    mapping: {},
    state: "receiving",
    personId: person.personId,
    createdAt: ctx.now(),
  });
  try {
    const { fileName, sizeBytes, fields } = await receive(ctx.db, id, request);
    const { source, mapping } = parseFields(fields);
    await inTransaction(ctx.db, async (tx) => {
      await tx
        .update(imports)
        .set({ source, mapping, fileName, sizeBytes, state: "queued" })
        .where(eq(imports.id, id));
      await appendTrail(ctx, tx, {
        act: "import.received",
        subjectKind: "import",
        subjectId: id,
        facts: { source, sizeBytes },
      });
    });
  } catch (error) {
    await discard(ctx, id);
    throw error;
  }
  return readImportOrThrow(ctx.db, id);
}

async function discard(ctx: Context, id: string): Promise<void> {
  await ctx.db.delete(importChunks).where(eq(importChunks.importId, id));
  await ctx.db
    .update(imports)
    .set({ state: "failed", problem: "The file did not come in whole", finishedAt: ctx.now() })
    .where(eq(imports.id, id));
}

async function receive(db: Database, id: string, request: Request): Promise<Received> {
  const contentType = request.headers.get("Content-Type") ?? "";
  if (!contentType.startsWith("multipart/form-data") || !request.body) {
    throw new KnownError("unsupported_media", "Send the file as multipart/form-data");
  }
  const form = busboy({
    headers: { "content-type": contentType } as BusboyHeaders,
    limits: { files: 1, fileSize: LARGEST_FILE_BYTES, fields: 4, fieldSize: 64 * 1024 },
  });
  const fields: Record<string, string> = {};
  let storing: Promise<{ fileName: string; sizeBytes: number }> | null = null;
  form.on("field", (name, value) => {
    fields[name] = value;
  });
  form.on("file", (_field, file, fileName) => {
    storing = storeChunks(db, id, file).then((sizeBytes) => ({ fileName: baseName(fileName), sizeBytes }));
    // The form's own error may come first; whoever awaits `storing` still gets this one.
    storing.catch((error) => form.destroy(error));
  });
  const source = Readable.fromWeb(request.body as Parameters<typeof Readable.fromWeb>[0]);
  await new Promise<void>((resolve, reject) => {
    form.once("finish", resolve);
    form.once("error", reject);
    source.once("error", reject);
    source.pipe(form);
  }).catch((error) => {
    throw error instanceof KnownError ? error : invalid([{ path: "file", message: "did not come in whole" }]);
  });
  const stored = await (storing as Promise<{ fileName: string; sizeBytes: number }> | null);
  if (!stored || stored.sizeBytes === 0) throw invalid([{ path: "file", message: "is missing or empty" }]);
  return { ...stored, fields };
}

async function storeChunks(
  db: Database,
  importId: string,
  file: Readable & { truncated: boolean },
): Promise<number> {
  let part = 0;
  let pieces: Buffer[] = [];
  let held = 0;
  let total = 0;
  const flush = async () => {
    if (held === 0) return;
    await db.insert(importChunks).values({ importId, part: part++, content: Buffer.concat(pieces, held) });
    pieces = [];
    held = 0;
  };
  for await (const piece of file as AsyncIterable<Buffer>) {
    pieces.push(piece);
    held += piece.byteLength;
    total += piece.byteLength;
    if (held >= CHUNK_BYTES) await flush();
  }
  if (file.truncated)
    throw new KnownError("too_large", "The file is larger than 512 MB; split it or compress it");
  await flush();
  return total;
}

function parseFields(fields: Record<string, string>): UploadFields {
  let mapping: unknown;
  try {
    mapping = fields.mapping === undefined ? undefined : JSON.parse(fields.mapping);
  } catch {
    throw invalid([{ path: "mapping", message: "is not JSON" }]);
  }
  const parsed = UploadFields.safeParse({ ...fields, mapping });
  if (!parsed.success) throw invalid(fieldErrors(parsed.error));
  return parsed.data;
}

const baseName = (path: string) => (path.split(/[\\/]/).pop() ?? "").slice(0, 255) || "file.csv";
