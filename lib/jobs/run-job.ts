import "server-only";
import { and, eq } from "drizzle-orm";
import type { Database } from "@/db/client";
import { isDuplicate } from "@/db/errors";
import { jobRuns } from "@/db/schema/cases";
import type { Context } from "../context";
import { faultOf } from "../fault";
import type { Job } from "../job";
import { log } from "../log";
import { newId } from "../new-id";

export type JobEnvironment = { db: Database; now: () => Date };

/**
 * Runs a job once, where no other server has claimed its slot. A fault is logged and kept with the slot; what was
 * left undone is for the next slot, since a job works on all that is due and not on what came since the last one.
 * @returns whether it ran here, and whether it ended well
 */
export async function runJob(
  { db, now }: JobEnvironment,
  job: Job,
  signal: AbortSignal,
): Promise<"done" | "failed" | "taken"> {
  const slot = job.slot?.(now()) ?? null;
  if (slot !== null && !(await claimSlot(db, job.name, slot, now()))) return "taken";
  const ctx: Context = {
    db,
    now,
    actor: { kind: "system", job: job.name },
    requestId: newId(),
    idempotency: null,
  };
  let problem: string | null = null;
  try {
    await job.run(ctx, signal);
  } catch (error) {
    log.error({ job: job.name, slot, requestId: ctx.requestId, err: error }, "A job failed");
    problem = `${faultOf(error).name}; the log has it under ${ctx.requestId}`;
  }
  if (slot !== null) {
    await db
      .update(jobRuns)
      .set({ finishedAt: now(), problem })
      .where(and(eq(jobRuns.job, job.name), eq(jobRuns.slot, slot)));
  }
  return problem === null ? "done" : "failed";
}

async function claimSlot(db: Database, job: string, slot: string, startedAt: Date): Promise<boolean> {
  try {
    await db.insert(jobRuns).values({ job, slot, startedAt });
    return true;
  } catch (error) {
    if (isDuplicate(error)) return false;
    throw error;
  }
}
