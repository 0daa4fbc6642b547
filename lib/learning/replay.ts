import "server-only";
import { and, asc, gt, inArray, lte } from "drizzle-orm";
import type { Database } from "@/db/client";
import { labelLog, scorers } from "@/db/schema/scorers";
import { createScorer, type Label, restoreScorer, type Scorer, type ScorerOptions } from "../scorer";
import { fitVector, signalSetOfScorer } from "../signals/read-signal-set";
import type { SignalSet } from "../signals/signal-set";
import { foldLog } from "./fold";
import { isSnapshotDue } from "./learn";

const PAGE_ROWS = 1_000;

export type ReplayReport = {
  rows: number;
  labels: number;
  /** First row of the log whose loss, as lived, does not come out again. */
  firstDifferingLoss: number | null;
  cumulativeLossEqual: boolean;
  /** Scorers whose state does not come out bit for bit. */
  differingStates: string[];
};

/**
 * Lives the label log again from nothing, under each scorer that was in use in turn: every loss must come out as
 * it was booked and every last state bit for bit.
 */
export async function replayLog(db: Database): Promise<ReplayReport> {
  const lineage = await db
    .select()
    .from(scorers)
    .where(inArray(scorers.role, ["in_use", "retired"]))
    .orderBy(asc(scorers.version));
  const report: ReplayReport = {
    rows: 0,
    labels: 0,
    firstDifferingLoss: null,
    cumulativeLossEqual: true,
    differingStates: [],
  };
  let afterSeq = 0;
  let cumulativeLoss = 0;
  for (const stage of lineage) {
    const life = new Life(db, stage.options, await signalSetOfScorer(db, stage));
    await life.refold(afterSeq);
    for await (const row of logRows(db, afterSeq, stage.logSeq)) {
      report.rows += 1;
      const loss = await life.take(row);
      if (loss === null) continue;
      cumulativeLoss += loss;
      if (!Object.is(loss, row.loss)) report.firstDifferingLoss ??= row.seq;
    }
    const scorer = await life.scorerBehind(stage.logSeq);
    if (!stage.state.equals(Buffer.from(scorer.snapshot()))) report.differingStates.push(stage.id);
    if (!Object.is(cumulativeLoss, stage.cumulativeLoss)) report.cumulativeLossEqual = false;
    report.labels = scorer.labels;
    afterSeq = stage.logSeq;
  }
  return report;
}

type LogRow = typeof labelLog.$inferSelect;

/** The scorer as it lived through the log; marks on the way spare it from folding all anew after a replaced label. */
class Life {
  private scorer: Scorer;
  private marks: { place: number; state: Uint8Array }[] = [];
  private stale = false;

  constructor(
    private readonly db: Database,
    private readonly options: ScorerOptions,
    private readonly signals: SignalSet,
  ) {
    this.scorer = createScorer(options);
  }

  /** @returns the loss of the score given before the label, or null for a row that replaces an earlier label */
  async take(row: LogRow): Promise<number | null> {
    const { place } = row;
    if (place !== null) {
      this.marks = this.marks.filter((mark) => mark.place < place);
      this.stale = true;
      return null;
    }
    const scorer = await this.scorerBehind(row.seq - 1);
    const vector = await fitVector(this.db, this.signals, row.transactionId, row.vector);
    const { loss } = scorer.learn(vector, row.label as Label, row.weight);
    if (isSnapshotDue(scorer.labels)) this.marks.push({ place: row.seq, state: scorer.snapshot() });
    return loss;
  }

  async scorerBehind(seq: number): Promise<Scorer> {
    if (this.stale) await this.refold(seq);
    return this.scorer;
  }

  async refold(upToSeq: number): Promise<void> {
    const mark = this.marks.at(-1);
    const from = mark
      ? { scorer: restoreScorer(mark.state), place: mark.place }
      : { scorer: createScorer(this.options), place: 0 };
    const { scorer, snapshots } = await foldLog(this.db, { ...from, signals: this.signals }, upToSeq);
    this.scorer = scorer;
    this.marks.push(...snapshots);
    this.stale = false;
  }
}

async function* logRows(db: Database, afterSeq: number, upToSeq: number): AsyncGenerator<LogRow> {
  for (let after = afterSeq; ; ) {
    const rows = await db
      .select()
      .from(labelLog)
      .where(and(gt(labelLog.seq, after), lte(labelLog.seq, upToSeq)))
      .orderBy(asc(labelLog.seq))
      .limit(PAGE_ROWS);
    yield* rows;
    const last = rows.at(-1);
    if (!last) return;
    after = last.seq;
  }
}
