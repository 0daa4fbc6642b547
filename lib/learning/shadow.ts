import "server-only";
import { setTimeout as sleep } from "node:timers/promises";
import { and, asc, eq, lt } from "drizzle-orm";
import { scorers } from "@/db/schema/scorers";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { lockCandidate } from "./candidate";
import { takeInRows } from "./take-in";

/** Few enough that state and losses are written in a moment. */
const ROWS_IN_TURN = 100;
/** Decisions come first: between two turns this rests so many times as long as the last one took. */
const REST_FACTOR = 2;
const LONGEST_REST_MS = 1_000;

/**
 * Brings every candidate up to the end of the label log, a turn each, in small transactions. This runs behind the
 * decisions and not in them, so that a decision takes no longer for each candidate; what comes out depends on the
 * log alone. Servers share the work: a candidate that one has locked is left to it.
 */
export async function followLog(ctx: Context, signal: AbortSignal): Promise<void> {
  demand(ctx, "scorer.manage");
  while (!signal.aborted) {
    const startedMs = performance.now();
    let taken = 0;
    for (const id of await candidatesBehind(ctx)) taken += await takeTurn(ctx, id);
    if (taken === 0) return;
    // Ends early when the server stops.
    const restMs = Math.min(LONGEST_REST_MS, REST_FACTOR * (performance.now() - startedMs));
    await sleep(restMs, undefined, { ref: false, signal }).catch(() => undefined);
  }
}

async function candidatesBehind(ctx: Context): Promise<string[]> {
  const [head] = await ctx.db.select({ seq: scorers.logSeq }).from(scorers).where(eq(scorers.inUse, 1));
  if (!head) return [];
  const behind = await ctx.db
    .select({ id: scorers.id })
    .from(scorers)
    .where(and(eq(scorers.role, "candidate"), lt(scorers.logSeq, head.seq)))
    .orderBy(asc(scorers.logSeq));
  return behind.map(({ id }) => id);
}

function takeTurn(ctx: Context, id: string): Promise<number> {
  return inTransaction(ctx.db, async (tx) => {
    const held = await lockCandidate(tx, id, { skipLocked: true });
    return held ? takeInRows(tx, held, ctx.now(), ROWS_IN_TURN) : 0;
  });
}
