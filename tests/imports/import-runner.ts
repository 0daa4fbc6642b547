import { createDatabase } from "@/db/client";
import { claimImport } from "@/lib/imports/lease";
import { runImport } from "@/lib/imports/run";
import { newId } from "@/lib/new-id";

/** The part of a server that reads an import, as a process of its own that a test can kill. */
const { db } = createDatabase(process.env.DATABASE_URL ?? "");
const now = new Date(process.env.RUNNER_NOW ?? "");
const claimed = await claimImport(db, now);
if (!claimed) throw new Error("There was nothing to claim");
const ctx = {
  db,
  now: () => now,
  actor: { kind: "system" as const, job: "imports" },
  requestId: newId(),
  idempotency: null,
};
await runImport(ctx, claimed, new AbortController().signal, Number(process.env.RUNNER_BATCH_ROWS));
