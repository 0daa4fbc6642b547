import "server-only";
import { and, asc, eq, gt, gte } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { candidateLosses } from "@/db/schema/learning";
import { labelLog, scorerSnapshots } from "@/db/schema/scorers";
import { Breath } from "../breath";
import { type Label, probabilityOf } from "../scorer";
import { fitVectors } from "../signals/read-signal-set";
import { foldedBy, foldLog, foldStart } from "./fold";
import { type HeldScorer, saveScorer } from "./held-scorer";
import { isSnapshotDue, keepSnapshot } from "./learn";

/** A turn with many long re-runs ends early, so that nobody waits long for the candidate's lock. */
const LONGEST_TURN_MS = 500;

type Booked = typeof candidateLosses.$inferInsert;

/**
 * Lets a candidate live on by the next rows of the label log: it predicts each label before it learns it, and a row
 * that replaces an earlier label re-runs it from its own last snapshot, as the scorer in use was re-run. State and
 * losses are written together; how the rows are cut into turns changes neither. The caller holds the candidate's lock.
 * @returns rows taken in
 */
export async function takeInRows(tx: Tx, held: HeldScorer, now: Date, atMost: number): Promise<number> {
  const rows = await tx
    .select()
    .from(labelLog)
    .where(gt(labelLog.seq, held.logSeq))
    .orderBy(asc(labelLog.seq))
    .limit(atMost);
  const vectors = await fitVectors(tx, held.signals, rows);
  const startedMs = performance.now();
  const breath = new Breath();
  const booked: Booked[] = [];
  let taken = 0;
  /** Earliest place whose label was replaced since the state was last folded. */
  let replacedFrom: number | null = null;
  for (const [index, row] of rows.entries()) {
    if (row.place !== null) replacedFrom = Math.min(replacedFrom ?? row.place, row.place);
    else {
      if (replacedFrom !== null) await foldAgain(tx, held, replacedFrom);
      replacedFrom = null;
      booked.push(await liveOne(tx, held, row, vectors[index] as Float64Array));
    }
    held.logSeq = row.seq;
    taken += 1;
    await breath.take();
    if (performance.now() - startedMs > LONGEST_TURN_MS) break;
  }
  if (taken === 0) return 0;
  if (replacedFrom !== null) await foldAgain(tx, held, replacedFrom);
  if (booked.length > 0) await tx.insert(candidateLosses).values(booked);
  await saveScorer(tx, held, now);
  return taken;
}

async function liveOne(
  tx: Tx,
  held: HeldScorer,
  row: typeof labelLog.$inferSelect,
  vector: Float64Array,
): Promise<Booked> {
  const { loss, logit } = held.scorer.learn(vector, row.label as Label, row.weight);
  held.cumulativeLoss += loss;
  if (isSnapshotDue(held.scorer.labels)) await keepSnapshot(tx, held.id, row.seq, held.scorer.snapshot());
  return { scorerId: held.id, seq: row.seq, probability: probabilityOf(logit), loss };
}

/** The state becomes the fold of the log as it stood at the last row taken in. */
async function foldAgain(tx: Tx, held: HeldScorer, replacedFrom: number): Promise<void> {
  await tx
    .delete(scorerSnapshots)
    .where(and(eq(scorerSnapshots.scorerId, held.id), gte(scorerSnapshots.place, replacedFrom)));
  const from = await foldStart(tx, foldedBy(held), replacedFrom);
  const { scorer, snapshots } = await foldLog(tx, from, held.logSeq);
  for (const { place, state } of snapshots) await keepSnapshot(tx, held.id, place, state);
  held.scorer = scorer;
}
