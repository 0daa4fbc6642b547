import "server-only";
import { createHash } from "node:crypto";
import { and, eq } from "drizzle-orm";
import type { Database } from "@/db/client";
import { importChunks, imports } from "@/db/schema/transactions";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { invalid, KnownError } from "../errors";
import { fieldErrors } from "../field-errors";
import { idempotencyOf, keyOf } from "../idempotency-key";
import { newId } from "../new-id";
import { appendTrail } from "../trail/append";
import { holdsCardNumber } from "../transactions/card-number";
import { writeOnce } from "../write-once";
import { abandonUpload, uploadLeaseEnd } from "./abandon";
import { LARGEST_FILE_BYTES, LARGEST_FILE_WORDS } from "./limits";
import { BrokenOff, type FormFields, type FormFile, readForm } from "./multipart";
import { readImportOrThrow } from "./read";
import { type ImportView, UploadFields } from "./schema";

const CHUNK_BYTES = 1024 ** 2;

/**
 * Takes a file in, piece by piece into the database, where any server finds it, and queues it for reading.
 * One that is refused leaves nothing; one that breaks off leaves an import that says so, and nothing of its content.
 * With an Idempotency-Key the same file again is let go once it is in whole, and the first import is the answer.
 */
export function uploadImport(ctx: Context, _input: object, request: Request): Promise<ImportView> {
  return uploadUpTo(LARGEST_FILE_BYTES, ctx, request);
}

export async function uploadUpTo(largestBytes: number, ctx: Context, request: Request): Promise<ImportView> {
  const { personId } = demandPerson(ctx, "intake.upload");
  const id = newId();
  const key = keyOf(request);
  try {
    const content = await readForm(request, largestBytes, async (form, givenName, file) => {
      const fields = parseFields(form);
      const fileName = nameOf(givenName);
      await ctx.db.insert(imports).values({
        ...fields,
        id,
        fileName,
        state: "receiving",
        personId,
        createdAt: ctx.now(),
        leaseExpiresAt: uploadLeaseEnd(ctx.now()),
      });
      return { ...fields, fileName, sha256: await storeChunks(ctx, id, file) };
    });
    const idempotency = idempotencyOf(key, { route: "POST /api/imports", content });
    return await queue({ ...ctx, idempotency }, id);
  } catch (error) {
    if (error instanceof BrokenOff) await abandonUpload(ctx.db, id, ctx.now());
    else await forget(ctx.db, id);
    throw error;
  }
}

function queue(ctx: Context, id: string): Promise<ImportView> {
  return writeOnce(ctx, async (tx) => {
    const [row] = await tx
      .select()
      .from(imports)
      .where(and(eq(imports.id, id), eq(imports.state, "receiving")))
      .for("update");
    if (!row) throw new BrokenOff();
    await tx.update(imports).set({ state: "queued", leaseExpiresAt: null }).where(eq(imports.id, id));
    await appendTrail(ctx, tx, {
      act: "import.received",
      subjectKind: "import",
      subjectId: id,
      facts: { source: row.source, sizeBytes: row.sizeBytes },
    });
    return readImportOrThrow(tx, id);
  });
}

async function forget(db: Database, id: string): Promise<void> {
  await db.transaction(async (tx) => {
    await tx.delete(importChunks).where(eq(importChunks.importId, id));
    await tx.delete(imports).where(eq(imports.id, id));
  });
}

/**
 * Each piece is counted at once, so that the list shows how far a transfer is and tells a dead one.
 * @returns the SHA-256 of the whole, in hexadecimal digits
 */
async function storeChunks(ctx: Context, importId: string, file: FormFile): Promise<string> {
  const hash = createHash("sha256");
  let part = 0;
  let pieces: Buffer[] = [];
  let held = 0;
  let sizeBytes = 0;
  const flush = async () => {
    if (held === 0) return;
    await ctx.db
      .insert(importChunks)
      .values({ importId, part: part++, content: Buffer.concat(pieces, held) });
    await ctx.db
      .update(imports)
      .set({ sizeBytes, leaseExpiresAt: uploadLeaseEnd(ctx.now()) })
      .where(eq(imports.id, importId));
    pieces = [];
    held = 0;
  };
  for await (const piece of file) {
    pieces.push(piece);
    hash.update(piece);
    held += piece.byteLength;
    sizeBytes += piece.byteLength;
    if (held >= CHUNK_BYTES) await flush();
  }
  if (file.truncated)
    throw new KnownError(
      "too_large",
      `The file is larger than ${LARGEST_FILE_WORDS}; compress it with gzip or split it`,
    );
  await flush();
  if (sizeBytes === 0) throw invalid([{ path: "file", message: "is empty" }]);
  return hash.digest("hex");
}

function parseFields({ mapping: mappingText, ...rest }: FormFields): UploadFields {
  let mapping: unknown;
  try {
    mapping = mappingText === undefined ? undefined : JSON.parse(mappingText);
  } catch {
    throw invalid([{ path: "mapping", message: "is not JSON" }]);
  }
  const parsed = UploadFields.safeParse({ ...rest, mapping });
  if (!parsed.success) {
    // Below `mapping` are headers, which may hold data where a file has none.
    throw invalid(
      fieldErrors(parsed.error).map(({ path, message }) => ({ path: path.split(".")[0] ?? "", message })),
    );
  }
  if (Object.keys(parsed.data.mapping).some(holdsCardNumber)) {
    throw invalid([{ path: "mapping", message: "has a header that looks like a payment card number" }]);
  }
  return parsed.data;
}

function nameOf(path: string): string {
  const name = (path.split(/[\\/]/).pop() ?? "").replace(/\p{Cc}/gu, "").slice(0, 255) || "file.csv";
  if (holdsCardNumber(name))
    throw invalid([{ path: "file", message: "has a name that looks like a payment card number" }]);
  return name;
}
