import "server-only";
import { and, desc, eq, lt, ne } from "drizzle-orm";
import type { Database } from "@/db/client";
import { isDuplicate } from "@/db/errors";
import { influenceRuns } from "@/db/schema/learning";
import type { HeldScorer } from "./held-scorer";
import type { InfluenceResult } from "./influence-schema";

/** Without a sign of life for so long, the server that was at it is gone. */
const LEASE_MS = 120_000;
/** Between two reckonings there is so many times as long as the last one took, since decisions come first. */
const REST_FACTOR = 4;

export type DoneRun = {
  scorerId: string;
  asOfSeq: number;
  startedAt: Date;
  finishedAt: Date;
  result: InfluenceResult;
};

/** The newest reckoning that came to its end; null before the first. */
export async function newestRun(db: Database): Promise<DoneRun | null> {
  const [row] = await db
    .select()
    .from(influenceRuns)
    .where(eq(influenceRuns.state, "done"))
    .orderBy(desc(influenceRuns.id))
    .limit(1);
  if (!row?.finishedAt || !row.result) return null;
  const { scorerId, asOfSeq, startedAt, finishedAt, result } = row;
  return { scorerId, asOfSeq, startedAt, finishedAt, result };
}

/** Whether the machines have rested since the last reckoning. */
export function isRested(last: DoneRun | null, now: Date): boolean {
  if (!last) return true;
  const tookMs = last.finishedAt.getTime() - last.startedAt.getTime();
  return now.getTime() >= last.finishedAt.getTime() + REST_FACTOR * tookMs;
}

/** @returns the run's id, or null while another server, or another request, is at one */
export async function claimRun(db: Database, held: HeldScorer, now: Date): Promise<number | null> {
  await db
    .update(influenceRuns)
    .set({ state: "failed", finishedAt: now })
    .where(and(eq(influenceRuns.state, "running"), lt(influenceRuns.leaseExpiresAt, now)));
  try {
    const [claimed] = await db
      .insert(influenceRuns)
      .values({
        scorerId: held.id,
        asOfSeq: held.logSeq,
        state: "running",
        startedAt: now,
        leaseExpiresAt: leaseFrom(now),
      })
      .$returningId();
    return claimed?.id ?? null;
  } catch (error) {
    if (isDuplicate(error)) return null;
    throw error;
  }
}

/** @returns false when the run is no longer ours */
export async function renewRun(db: Database, id: number, now: Date): Promise<boolean> {
  const [result] = await db
    .update(influenceRuns)
    .set({ leaseExpiresAt: leaseFrom(now) })
    .where(and(eq(influenceRuns.id, id), eq(influenceRuns.state, "running")));
  return result.affectedRows === 1;
}

/** Keeps what came out, or that nothing did, and forgets older runs. */
export async function endRun(
  db: Database,
  id: number,
  result: InfluenceResult | null,
  now: Date,
): Promise<void> {
  await db
    .update(influenceRuns)
    .set({ state: result ? "done" : "failed", finishedAt: now, result })
    .where(and(eq(influenceRuns.id, id), eq(influenceRuns.state, "running")));
  if (result)
    await db.delete(influenceRuns).where(and(lt(influenceRuns.id, id), ne(influenceRuns.state, "running")));
}

const leaseFrom = (now: Date) => new Date(now.getTime() + LEASE_MS);
