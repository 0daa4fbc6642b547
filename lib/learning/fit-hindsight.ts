import "server-only";
import { and, asc, desc, eq, gt, inArray, isNotNull, min, notInArray } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { bytesToVector, vectorToBytes } from "@/db/columns";
import { hindsightFits } from "@/db/schema/learning";
import { labelLog, scorers } from "@/db/schema/scorers";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import { Breath, inBreaths } from "../breath";
import type { Context } from "../context";
import { bestInHindsightInSteps, createScorer, type Label, type ScorerOptions } from "../scorer";
import { signalSetOfScorer } from "../signals/read-signal-set";
import type { SignalSet } from "../signals/signal-set";
import { isNewFitDue, prefixesOf } from "./hindsight-rules";
import { labelsInForceUpTo } from "./labels-in-force";

/** What a scorer is held against: the best fixed weights within the same bounds, from the same base rate. */
export type Yardstick = {
  signalSetVersion: number;
  weightBound: number;
  featureBound: number;
  offset: number;
};

export function yardstickOf(scorer: { signalSetVersion: number; options: ScorerOptions }): Yardstick {
  const { weightBound = 0, featureBound = 0, offset = 0 } = scorer.options;
  return { signalSetVersion: scorer.signalSetVersion, weightBound, featureBound, offset };
}

export const fitsOf = (yardstick: Yardstick) =>
  and(
    eq(hindsightFits.signalSetVersion, yardstick.signalSetVersion),
    eq(hindsightFits.weightBound, yardstick.weightBound),
    eq(hindsightFits.featureBound, yardstick.featureBound),
    eq(hindsightFits.offset, yardstick.offset),
  );

/**
 * Computes the best fixed weights in hindsight for the labels in force, once for every set of bounds that a running
 * scorer has, where the log has grown enough or an earlier label was replaced. It pauses every few milliseconds.
 */
export async function fitHindsight(ctx: Context, signal: AbortSignal): Promise<void> {
  demand(ctx, "scorer.read");
  const running = await ctx.db
    .select({
      id: scorers.id,
      signalSetVersion: scorers.signalSetVersion,
      options: scorers.options,
      inUse: scorers.inUse,
      logSeq: scorers.logSeq,
    })
    .from(scorers)
    .where(inArray(scorers.role, ["in_use", "candidate"]))
    .orderBy(desc(scorers.inUse));
  const headSeq = running.find(({ inUse }) => inUse === 1)?.logSeq ?? 0;
  const yardsticks = new Map(
    running.map((scorer) => [JSON.stringify(yardstickOf(scorer)), { scorer, ...yardstickOf(scorer) }]),
  );
  for (const { scorer, ...yardstick } of yardsticks.values()) {
    if (signal.aborted) return;
    const signals = await signalSetOfScorer(ctx.db, scorer);
    await fitOne(ctx, yardstick, signals, headSeq, signal);
  }
}

async function fitOne(
  ctx: Context,
  yardstick: Yardstick,
  signals: SignalSet,
  headSeq: number,
  signal: AbortSignal,
): Promise<void> {
  const kept = await ctx.db
    .select()
    .from(hindsightFits)
    .where(fitsOf(yardstick))
    .orderBy(asc(hindsightFits.asOfSeq));
  const newest = kept.at(-1);
  if (newest?.asOfSeq === headSeq) return;
  const replacedFrom = newest ? await earliestReplaced(ctx.db, newest.asOfSeq) : null;
  // With nothing replaced, every row since is a label more.
  if (newest && replacedFrom === null && !isNewFitDue(newest.labels, headSeq - newest.asOfSeq)) return;
  const log = await readLog(ctx.db, yardstick, signals, headSeq);
  const standing = kept.filter((fit) => replacedFrom === null || fit.asOfSeq < replacedFrom);
  const asOfSeqs: number[] = [];
  let start: Float64Array | undefined;
  for (const labels of prefixesOf(log.labels.length)) {
    if (signal.aborted) return;
    const isWhole = labels === log.labels.length;
    // What came behind the last label took labels away: the whole log is fitted as it stands at its end.
    const asOfSeq = isWhole ? headSeq : (log.seqs[labels - 1] as number);
    asOfSeqs.push(asOfSeq);
    const known = standing.find((fit) => fit.asOfSeq === asOfSeq && fit.labels === labels);
    if (known) {
      start = bytesToVector(known.weights);
      continue;
    }
    const { weights, loss } = await inBreaths(
      bestInHindsightInSteps(
        log.vectors.slice(0, labels),
        log.labels.slice(0, labels),
        yardstick.weightBound,
        yardstick.offset,
        start,
      ),
    );
    start = weights;
    const fit = { labels, loss, weights: vectorToBytes(weights), computedAt: ctx.now() };
    await ctx.db
      .insert(hindsightFits)
      .values({ ...yardstick, asOfSeq, ...fit })
      .onDuplicateKeyUpdate({ set: fit });
  }
  await inTransaction(ctx.db, (tx) =>
    tx
      .delete(hindsightFits)
      .where(and(fitsOf(yardstick), notInArray(hindsightFits.asOfSeq, [...asOfSeqs, -1]))),
  );
}

/** Earliest place whose label was replaced behind the row; null for none. */
async function earliestReplaced(db: Executor, behindSeq: number): Promise<number | null> {
  const [row] = await db
    .select({ place: min(labelLog.place) })
    .from(labelLog)
    .where(and(gt(labelLog.seq, behindSeq), isNotNull(labelLog.place)));
  return row?.place ?? null;
}

type Log = { seqs: number[]; labels: Label[]; vectors: Float64Array[] };

/** Vectors as a scorer of that bound sees them. */
async function readLog(
  db: Executor,
  { featureBound }: Yardstick,
  signals: SignalSet,
  headSeq: number,
): Promise<Log> {
  const bounding = createScorer({ method: "gradient", dimension: signals.dimension, featureBound });
  const log: Log = { seqs: [], labels: [], vectors: [] };
  const breath = new Breath();
  for await (const { seq, label, vector } of labelsInForceUpTo(db, signals, headSeq)) {
    log.seqs.push(seq);
    log.labels.push(label);
    log.vectors.push(bounding.place(vector).vector);
    await breath.take();
  }
  return log;
}
