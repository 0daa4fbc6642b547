import "server-only";
import { setTimeout as sleep } from "node:timers/promises";
import { and, asc, eq, gt, inArray, isNull, ne } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { scores, signalSets } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { type HeldScorer, readScorerInUse } from "../learning/held-scorer";
import { recomputeVectors } from "../signals/recompute";
import { UNDECIDED_STATES } from "./codes";
import { casesRescored } from "./notify";
import { writeScores } from "./refresh";

/** So long a decision on one of them may have to wait. */
const CASES_IN_BATCH = 40;
/** Decisions come first: between two batches this rests so many times as long as the last one took. */
const REST_FACTOR = 3;
/** A payment that was being scored while the set changed may open its case a little later. */
const STRAGGLERS_MS = 60_000;

/**
 * After a switch of the team's own signals every waiting case gets a score by the set in use; until then the ranking
 * takes the switched signal as saying nothing about it. Done once a set, and begun anew where it was broken off: what
 * has been scored is passed over.
 */
export async function rescoreWaitingCases(ctx: Context, signal: AbortSignal): Promise<void> {
  demand(ctx, "desk.work");
  const held = await readScorerInUse(ctx.db);
  const [set] = await ctx.db
    .select({ createdAt: signalSets.createdAt })
    .from(signalSets)
    .where(and(eq(signalSets.version, held.signals.version), isNull(signalSets.rescoredAt)));
  if (!set) return;
  const begunAt = ctx.now();
  if (!(await rescoreAll(ctx, held, signal))) return;
  if (begunAt.getTime() < set.createdAt.getTime() + STRAGGLERS_MS) return;
  await ctx.db
    .update(signalSets)
    .set({ rescoredAt: begunAt })
    .where(eq(signalSets.version, held.signals.version));
}

/** @returns whether it came to the end */
async function rescoreAll(ctx: Context, held: HeldScorer, signal: AbortSignal): Promise<boolean> {
  for (let after = 0; ; ) {
    if (signal.aborted) return false;
    const startedMs = performance.now();
    const now = await readScorerInUse(ctx.db);
    if (now.signals.version !== held.signals.version) return false;
    const page = await inTransaction(ctx.db, (tx) => rescorePage(ctx, tx, now, after));
    const last = page.at(-1);
    if (!last) return true;
    after = last.number;
    casesRescored(page.map(({ caseId }) => caseId));
    const restMs = REST_FACTOR * (performance.now() - startedMs);
    await sleep(restMs, undefined, { ref: false, signal }).catch(() => undefined);
  }
}

/** Locks the cases before their signals are taken anew: a refresh in between must not be followed by an older one. */
async function rescorePage(ctx: Context, tx: Tx, held: HeldScorer, afterNumber: number) {
  const page = await lockOfOtherSets(tx, held, afterNumber);
  const vectors = await recomputeVectors(
    ctx.db,
    page.map(({ transactionId }) => transactionId),
    held.signals,
  );
  await writeScores(ctx, tx, held, page, vectors);
  return page;
}

function lockOfOtherSets(tx: Tx, { signals }: HeldScorer, afterNumber: number) {
  return tx
    .select({ caseId: cases.id, number: cases.number, transactionId: cases.transactionId })
    .from(cases, { forceIndex: ["cases_number_unique"] })
    .innerJoin(scores, eq(scores.id, cases.scoreId))
    .where(
      and(
        gt(cases.number, afterNumber),
        inArray(cases.state, [...UNDECIDED_STATES]),
        ne(scores.signalSetVersion, signals.version),
      ),
    )
    .orderBy(asc(cases.number))
    .limit(CASES_IN_BATCH)
    .for("update");
}
