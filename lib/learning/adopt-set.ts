import "server-only";
import { and, eq, gt, isNotNull, min } from "drizzle-orm";
import type { Executor, Tx } from "@/db/client";
import { labelLog, scorers } from "@/db/schema/scorers";
import { newId } from "../new-id";
import { policyInForce } from "../policy/read";
import { takeNewCut } from "../policy/thresholds";
import { createScorer, restoreScorer } from "../scorer";
import type { SignalSet } from "../signals/signal-set";
import { beginCandidatesAnew } from "./begin-anew";
import { type Folded, foldLog } from "./fold";
import { type HeldScorer, lockScorerInUse, readScorerInUse } from "./held-scorer";
import { keepSnapshot } from "./learn";
import type { FoldAhead } from "./replace";

export type Adopted = {
  from: string;
  scorerId: string;
  version: number;
  labels: number;
  candidates: { from: string; to: string }[];
};

/** The scorer in use as it would be had it always read this set: the whole log again, outside the scorer's lock. */
export async function foldForSet(db: Executor, set: SignalSet): Promise<FoldAhead> {
  const held = await readScorerInUse(db);
  const { scorer, snapshots } = await foldLog(db, untrained(held, set), held.logSeq);
  return { scorerId: held.id, logSeq: held.logSeq, state: scorer.snapshot(), snapshots };
}

/**
 * Puts a scorer in use that reads the set, as if it had always been there. The one before is retired with its last
 * version, so that a score it gave can still be derived; candidates begin anew. What came since the fold ahead is
 * caught up with under the lock. The caller has stored the set and appends to the trail after.
 */
export async function adoptSet(tx: Tx, now: Date, set: SignalSet, ahead: FoldAhead): Promise<Adopted> {
  const held = await lockScorerInUse(tx);
  const { scorer, snapshots } = await caughtUp(tx, held, set, ahead);
  const [before] = await tx.select().from(scorers).where(eq(scorers.id, held.id));
  if (!before) throw new Error("The scorer in use is not there");
  const { inUse: _, ...kept } = before;
  const scorerId = newId();
  const version = held.version + 1;
  await tx.update(scorers).set({ role: "retired", changedAt: now }).where(eq(scorers.id, held.id));
  await tx.insert(scorers).values({
    ...kept,
    id: scorerId,
    role: "in_use",
    signalSetVersion: set.version,
    options: { ...scorer.options },
    version,
    state: Buffer.from(scorer.snapshot()),
    // It predicted nothing as a candidate: its own losses are those that were lived.
    carriedLoss: null,
    createdAt: now,
    changedAt: now,
  });
  for (const { place, state } of snapshots) await keepSnapshot(tx, scorerId, place, state);
  const candidates = await beginCandidatesAnew(tx, now, held.logSeq, {
    options: { dimension: set.dimension },
    signalSetVersion: set.version,
  });
  await takeNewCut(tx, await policyInForce(tx, now), now, { scorer, version, signals: set });
  return { from: held.id, scorerId, version, labels: scorer.labels, candidates };
}

function untrained({ scorer }: HeldScorer, set: SignalSet) {
  const options = { ...scorer.options, dimension: set.dimension };
  return { scorer: createScorer(options), place: 0, signals: set };
}

/** From where the fold ahead is still right: its end, or where labels behind it were replaced since, a snapshot before. */
async function caughtUp(tx: Tx, held: HeldScorer, set: SignalSet, ahead: FoldAhead): Promise<Folded> {
  const isOfThis = ahead.scorerId === held.id;
  const [replaced] = await tx
    .select({ earliest: min(labelLog.place) })
    .from(labelLog)
    .where(and(gt(labelLog.seq, ahead.logSeq), isNotNull(labelLog.place)));
  const earliest = replaced?.earliest ?? null;
  if (isOfThis && (earliest === null || earliest > ahead.logSeq)) {
    const from = { scorer: restoreScorer(ahead.state), place: ahead.logSeq, signals: set };
    const rest = await foldLog(tx, from, held.logSeq);
    return { scorer: rest.scorer, snapshots: [...ahead.snapshots, ...rest.snapshots] };
  }
  const good = isOfThis ? ahead.snapshots.filter(({ place }) => place < (earliest ?? 0)) : [];
  const last = good.at(-1);
  const from = last
    ? { scorer: restoreScorer(last.state), place: last.place, signals: set }
    : untrained(held, set);
  const rest = await foldLog(tx, from, held.logSeq);
  return { scorer: rest.scorer, snapshots: [...good, ...rest.snapshots] };
}
