import "server-only";
import { lt } from "drizzle-orm";
import type { Database } from "@/db/client";
import { jobRuns } from "@/db/schema/cases";
import { endedSessions, idempotencyKeys } from "@/db/schema/people";
import { LONGEST_SECONDS } from "../auth/session";
import { type Job, slotOfMinutes } from "../job";

const HOUR_MS = 60 * 60 * 1000;
/** As promised to callers: a repeated request within a day gets its first answer. */
const IDEMPOTENCY_KEY_MS = 24 * HOUR_MS;
const JOB_RUN_MS = 90 * 24 * HOUR_MS;
/** Small enough that no lock is held for long. */
const BATCH = 5_000;

export const housekeepingJobs: readonly Job[] = [
  {
    name: "housekeeping",
    everyMs: 5 * 60_000,
    slot: slotOfMinutes(60),
    run: (ctx, signal) => forgetOldRows(ctx.db, ctx.now(), signal),
  },
];

/** Deletes idempotency keys after a day, ended sessions once no token can name them, and job runs after a quarter. */
export async function forgetOldRows(db: Database, now: Date, signal?: AbortSignal): Promise<void> {
  const keysBefore = new Date(now.getTime() - IDEMPOTENCY_KEY_MS);
  await inBatches(signal, () =>
    db.delete(idempotencyKeys).where(lt(idempotencyKeys.createdAt, keysBefore)).limit(BATCH),
  );
  const sessionsBefore = new Date(now.getTime() - LONGEST_SECONDS * 1000 - HOUR_MS);
  await inBatches(signal, () =>
    db.delete(endedSessions).where(lt(endedSessions.endedAt, sessionsBefore)).limit(BATCH),
  );
  const runsBefore = new Date(now.getTime() - JOB_RUN_MS);
  await inBatches(signal, () => db.delete(jobRuns).where(lt(jobRuns.startedAt, runsBefore)).limit(BATCH));
}

type Deleted = [{ affectedRows: number }, ...unknown[]];

async function inBatches(
  signal: AbortSignal | undefined,
  deleteSome: () => PromiseLike<Deleted>,
): Promise<void> {
  while (!signal?.aborted) {
    const [{ affectedRows }] = await deleteSome();
    if (affectedRows < BATCH) return;
  }
}
