import "server-only";
import { and, asc, gt, gte, isNull, lte, type SQL, sql } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { candidateLosses } from "@/db/schema/learning";
import { labelLog } from "@/db/schema/scorers";
import { Breath } from "../breath";
import type { Label } from "../scorer";
import { replacedLabels } from "./labels-in-force";
import { countUpTo } from "./rows";

const PAGE_ROWS = 400;

/** A label as it came: what holds now may be another. `isFinding`: somebody found it; else it matured by itself. */
export type JudgedRow = {
  seq: number;
  at: Date;
  came: Label;
  holds: Label | 0;
  isFinding: boolean;
  livedLoss: number;
};

/** Rows of the label log in a span of time, at most the newest so many, and how many older ones were left out. */
export async function readJudged(
  db: Executor,
  span: { from?: Date; to?: Date },
  atMost: number,
): Promise<{ rows: JudgedRow[]; leftOut: number }> {
  const inSpan = and(
    isNull(labelLog.place),
    span.from && gte(labelLog.at, span.from),
    span.to && lte(labelLog.at, span.to),
  );
  const [counted] = await db
    .select({ count: sql`count(*)`.mapWith(Number), first: sql`min(seq)`.mapWith(Number) })
    .from(labelLog)
    .where(inSpan);
  const count = counted?.count ?? 0;
  if (count === 0) return { rows: [], leftOut: 0 };
  const leftOut = Math.max(0, count - atMost);
  const [first] = await db
    .select({ seq: labelLog.seq })
    .from(labelLog)
    .where(inSpan)
    .orderBy(asc(labelLog.seq))
    .limit(1)
    .offset(leftOut);
  const rows: JudgedRow[] = [];
  const breath = new Breath();
  for (let after = (first?.seq ?? 1) - 1; ; ) {
    const page = await db
      .select({
        seq: labelLog.seq,
        at: labelLog.at,
        kind: labelLog.kind,
        label: labelLog.label,
        loss: labelLog.loss,
      })
      .from(labelLog)
      .where(and(inSpan, gt(labelLog.seq, after)))
      .orderBy(asc(labelLog.seq))
      .limit(PAGE_ROWS);
    for (const { seq, at, kind, label, loss } of page) {
      const came = label as Label;
      rows.push({ seq, at, came, holds: came, isFinding: kind !== "matured", livedLoss: loss ?? 0 });
    }
    await breath.take();
    const last = page.at(-1);
    if (!last || page.length < PAGE_ROWS) break;
    after = last.seq;
  }
  const replaced = await replacedLabels(db, rows[0]?.seq ?? 0, rows.at(-1)?.seq ?? 0);
  for (const row of rows) row.holds = replaced.get(row.seq) ?? row.came;
  return { rows, leftOut };
}

/** What one scorer predicted for the rows that it has come to; probability is of fraud, loss is of the label that came. */
export type Predictions = { count: number; probabilities: Float64Array; losses: Float64Array };

/**
 * A scorer's own predictions of the rows: what it predicted as a candidate, and for every other row what was
 * predicted in use, of which p(label that came) = e^(−loss).
 * @param upToSeq last row of the log that the scorer has taken in
 */
export async function readPredictions(
  db: Executor,
  scorerId: string,
  upToSeq: number,
  rows: readonly JudgedRow[],
): Promise<Predictions> {
  const count = countUpTo(rows, upToSeq);
  const probabilities = new Float64Array(count);
  const losses = new Float64Array(count);
  for (const [index, { came, livedLoss }] of rows.slice(0, count).entries()) {
    probabilities[index] = came === 1 ? Math.exp(-livedLoss) : -Math.expm1(-livedLoss);
    losses[index] = livedLoss;
  }
  const breath = new Breath();
  let index = 0;
  for (let after = (rows[0]?.seq ?? 1) - 1; count > 0; ) {
    const page = await db
      .select({
        seq: candidateLosses.seq,
        probability: candidateLosses.probability,
        loss: candidateLosses.loss,
      })
      .from(candidateLosses)
      .where(beside(scorerId, after, (rows[count - 1] as JudgedRow).seq))
      .orderBy(asc(candidateLosses.seq))
      .limit(PAGE_ROWS);
    for (const { seq, probability, loss } of page) {
      while (index < count && (rows[index] as JudgedRow).seq < seq) index += 1;
      if (rows[index]?.seq !== seq) continue;
      probabilities[index] = probability;
      losses[index] = loss;
    }
    await breath.take();
    const last = page.at(-1);
    if (!last || page.length < PAGE_ROWS) break;
    after = last.seq;
  }
  return { count, probabilities, losses };
}

const beside = (scorerId: string, after: number, upTo: number): SQL | undefined =>
  and(
    sql`${candidateLosses.scorerId} = ${scorerId}`,
    gt(candidateLosses.seq, after),
    lte(candidateLosses.seq, upTo),
  );
