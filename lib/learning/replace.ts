import "server-only";
import { and, eq, gt, gte, inArray, isNotNull, lte } from "drizzle-orm";
import type { Database, Tx } from "@/db/client";
import { labelLog, scorerSnapshots } from "@/db/schema/scorers";
import { type Label, restoreScorer } from "../scorer";
import { type Folded, foldedBy, foldLog, foldStart } from "./fold";
import type { HeldScorer } from "./held-scorer";
import { keepSnapshot, type LabelSource } from "./learn";

/** What shall hold from now on at a place of the log; 0 takes the label away. */
export type Replacement = LabelSource & { place: number; label: Label | 0 };

/** With a vector in each, one statement of all of a person's labels would be too large for the database. */
const ROWS_IN_STATEMENT = 1_000;

/** A fold made before the lock was taken, so that others need not wait for a long one. */
export type FoldAhead = {
  scorerId: string;
  logSeq: number;
  state: Uint8Array;
  snapshots: Folded["snapshots"];
};

/** With the labels by place that it holds although the log does not say so yet. */
export type ReplacedAhead = FoldAhead & { labels: ReadonlyMap<number, Label | 0> };

/** Folds the log with the replacements in place, outside any lock. */
export async function foldAhead(
  db: Database,
  held: HeldScorer,
  changes: readonly Pick<Replacement, "place" | "label">[],
): Promise<ReplacedAhead> {
  const from = await foldStart(db, foldedBy(held), lowestPlace(changes));
  const labels = new Map(changes.map((change) => [change.place, change.label]));
  const { scorer, snapshots } = await foldLog(db, from, held.logSeq, labels);
  return { scorerId: held.id, logSeq: held.logSeq, state: scorer.snapshot(), snapshots, labels };
}

/**
 * Appends the replacements to the log and re-runs it from the last snapshot before the earliest of them, so that the
 * state is bit for bit that of a log in which the replaced labels never stood. The caller holds the scorer's lock.
 */
export async function replaceLabels(
  tx: Tx,
  held: HeldScorer,
  now: Date,
  changes: readonly Replacement[],
  ahead?: ReplacedAhead,
): Promise<void> {
  if (changes.length === 0) return;
  const seqBefore = held.logSeq;
  for (let from = 0; from < changes.length; from += ROWS_IN_STATEMENT) {
    await appendRows(tx, held, now, changes.slice(from, from + ROWS_IN_STATEMENT));
  }
  const lowest = lowestPlace(changes);
  await tx
    .delete(scorerSnapshots)
    .where(and(eq(scorerSnapshots.scorerId, held.id), gte(scorerSnapshots.place, lowest)));
  const usable =
    ahead && isOfThese(changes, ahead) && (await isStillGood(tx, held, seqBefore, ahead)) ? ahead : null;
  const caughtUp = usable
    ? await foldLog(
        tx,
        { scorer: restoreScorer(usable.state), place: usable.logSeq, signals: held.signals },
        held.logSeq,
      )
    : await foldLog(tx, await foldStart(tx, foldedBy(held), lowest), held.logSeq);
  for (const snapshot of [...(usable?.snapshots ?? []), ...caughtUp.snapshots]) {
    await keepSnapshot(tx, held.id, snapshot.place, snapshot.state);
  }
  held.scorer = caughtUp.scorer;
}

async function appendRows(
  tx: Tx,
  held: HeldScorer,
  now: Date,
  changes: readonly Replacement[],
): Promise<void> {
  const places = changes.map((change) => change.place);
  const roots = await tx.select().from(labelLog).where(inArray(labelLog.seq, places));
  const rootOf = new Map(roots.map((root) => [root.seq, root]));
  await tx.insert(labelLog).values(
    changes.map((change) => {
      const root = rootOf.get(change.place);
      if (!root) throw new Error(`The label log has no place ${change.place}`);
      held.logSeq += 1;
      held.version += 1;
      return {
        ...change,
        seq: held.logSeq,
        weight: root.weight,
        vector: root.vector,
        signalSetVersion: root.signalSetVersion,
        loss: null,
        scorerVersion: held.version,
        at: now,
      };
    }),
  );
}

/** Whether the fold holds just what is replaced within it: between the two, findings may have come or gone. */
function isOfThese(changes: readonly Replacement[], { logSeq, labels }: ReplacedAhead): boolean {
  const within = changes.filter(({ place }) => place <= logSeq);
  return within.length === labels.size && within.every(({ place, label }) => labels.get(place) === label);
}

/** Labels that only came behind the fold can be caught up with; a replacement among them cannot. */
async function isStillGood(tx: Tx, held: HeldScorer, seqBefore: number, ahead: FoldAhead): Promise<boolean> {
  if (ahead.scorerId !== held.id) return false;
  if (ahead.logSeq === seqBefore) return true;
  const [since] = await tx
    .select({ seq: labelLog.seq })
    .from(labelLog)
    .where(and(gt(labelLog.seq, ahead.logSeq), lte(labelLog.seq, seqBefore), isNotNull(labelLog.place)))
    .limit(1);
  return !since;
}

const lowestPlace = (changes: readonly { place: number }[]) =>
  Math.min(...changes.map((change) => change.place));
