import "server-only";
import { and, asc, desc, eq, gt, isNotNull, isNull, lt, lte, min } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { labelLog, scorerSnapshots } from "@/db/schema/scorers";
import { Breath } from "../breath";
import { createScorer, type Label, restoreScorer, type Scorer, type ScorerOptions } from "../scorer";
import { fitVectors } from "../signals/read-signal-set";
import type { SignalSet } from "../signals/signal-set";
import type { HeldScorer } from "./held-scorer";
import { isSnapshotDue } from "./learn";

const PAGE_ROWS = 1_000;

export type Folded = {
  scorer: Scorer;
  /** Snapshots that fell due on the way, to be kept if the fold is adopted. */
  snapshots: { place: number; state: Uint8Array }[];
};

/** A state, the place of the last label in it, and the signals that its scorer reads. */
export type FoldFrom = { scorer: Scorer; place: number; signals: SignalSet };

/**
 * Learns the labels that hold at the places (from.place, upToSeq] in order, as the log stood at row `upToSeq`. Each
 * row's vector is read as the scorer's signals have it, so that a signal of the team's own counts as if always there.
 * @param overrides labels that shall hold although the log does not say so yet (0: none)
 */
export async function foldLog(
  db: Executor,
  from: FoldFrom,
  upToSeq: number,
  overrides: ReadonlyMap<number, Label | 0> = new Map(),
): Promise<Folded> {
  const { scorer } = from;
  const snapshots: Folded["snapshots"] = [];
  const breath = new Breath();
  for await (const rows of readPlaces(db, from, upToSeq)) {
    for (const row of rows) {
      const label = overrides.get(row.place) ?? row.label;
      if (label === 0) continue;
      scorer.learn(row.vector, label, row.weight);
      if (isSnapshotDue(scorer.labels)) snapshots.push({ place: row.place, state: scorer.snapshot() });
      await breath.take();
    }
  }
  return { scorer, snapshots };
}

/** What holds at a place of the log. */
export type PlaceRow = { place: number; label: Label | 0; weight: number; vector: Float64Array };

/** The places (from.place, upToSeq] in order, a page at a time, as the log stood at row `upToSeq`. */
export async function* readPlaces(
  db: Executor,
  from: Pick<FoldFrom, "place" | "signals">,
  upToSeq: number,
): AsyncGenerator<PlaceRow[]> {
  const replaced = await replacements(db, from.place, upToSeq);
  for (let after = from.place; ; ) {
    const rows = await db
      .select({
        seq: labelLog.seq,
        label: labelLog.label,
        weight: labelLog.weight,
        transactionId: labelLog.transactionId,
        vector: labelLog.vector,
      })
      .from(labelLog)
      .where(and(gt(labelLog.seq, after), lte(labelLog.seq, upToSeq), isNull(labelLog.place)))
      .orderBy(asc(labelLog.seq))
      .limit(PAGE_ROWS);
    const vectors = await fitVectors(db, from.signals, rows);
    yield rows.map(({ seq, label, weight }, index) => ({
      place: seq,
      label: replaced.get(seq) ?? (label as Label | 0),
      weight,
      vector: vectors[index] as Float64Array,
    }));
    const last = rows.at(-1);
    if (!last || rows.length < PAGE_ROWS) return;
    after = last.seq;
  }
}

/** Whose log is folded: its snapshots, how it starts untrained, and what it reads. */
export type FoldedScorer = { id: string; options: ScorerOptions; signals: SignalSet };

export const foldedBy = ({ id, scorer, signals }: HeldScorer): FoldedScorer => ({
  id,
  options: scorer.options,
  signals,
});

/**
 * Nearest state below `place` from which the log as of `asOfSeq` can be folded: a snapshot that no later row
 * of the log has reached behind, else the untrained scorer.
 */
export async function foldStart(
  db: Executor,
  of: FoldedScorer,
  place: number,
  asOfSeq = Number.MAX_SAFE_INTEGER,
): Promise<FoldFrom> {
  const [later] = await db
    .select({ earliest: min(labelLog.place) })
    .from(labelLog)
    .where(and(gt(labelLog.seq, asOfSeq), isNotNull(labelLog.place)));
  const below = Math.min(place, later?.earliest ?? place);
  const [snapshot] = await db
    .select()
    .from(scorerSnapshots)
    .where(and(eq(scorerSnapshots.scorerId, of.id), lt(scorerSnapshots.place, below)))
    .orderBy(desc(scorerSnapshots.place))
    .limit(1);
  const { signals } = of;
  return snapshot
    ? { scorer: restoreScorer(snapshot.state), place: snapshot.place, signals }
    : { scorer: createScorer(of.options), place: 0, signals };
}

async function replacements(
  db: Executor,
  afterPlace: number,
  upToSeq: number,
): Promise<Map<number, Label | 0>> {
  const rows = await db
    .select({ place: labelLog.place, label: labelLog.label })
    .from(labelLog)
    .where(and(gt(labelLog.place, afterPlace), lte(labelLog.seq, upToSeq)))
    .orderBy(asc(labelLog.seq));
  return new Map(rows.map((row) => [row.place as number, row.label as Label | 0]));
}
