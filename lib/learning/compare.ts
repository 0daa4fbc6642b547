import "server-only";
import { asc, desc, inArray } from "drizzle-orm";
import type { Database } from "@/db/client";
import { scorers } from "@/db/schema/scorers";
import { demand } from "../auth/demand";
import { inBreaths } from "../breath";
import type { Context } from "../context";
import { policyInForce } from "../policy/read";
import { restoreScorer } from "../scorer";
import { curveOf } from "./curve";
import { figuresInSteps, type Judged } from "./figures";
import { yardstickOf } from "./fit-hindsight";
import type { LearningInput, LearningView, ScorerFigures } from "./learning-schema";
import { optionsView } from "./options-view";
import { type JudgedRow, type Predictions, readJudged, readPredictions } from "./own-predictions";
import { listFits, ownLossesBehind, regretAt } from "./regret";

/** The newest so many labels of the window are judged; more would tell nothing new and cost a reader seconds. */
const MOST_JUDGED = 10_000;
const DAY_MS = 86_400_000;

/** The scorer in use and the candidates beside it, judged on the same labels of a span of time. */
export async function readLearning(ctx: Context, input: LearningInput): Promise<LearningView> {
  demand(ctx, "scorer.read");
  const { db } = ctx;
  const span = { from: input.from && new Date(input.from), to: input.to && new Date(input.to) };
  const running = await db
    .select()
    .from(scorers)
    .where(inArray(scorers.role, ["in_use", "candidate"]))
    .orderBy(desc(scorers.inUse), asc(scorers.createdAt), asc(scorers.id));
  const [inUse] = running;
  if (!inUse) throw new Error("No scorer is in use; the installation is not set up");
  const { terms } = await policyInForce(db, ctx.now());
  const { rows, leftOut } = await readJudged(
    db,
    { from: span.from || undefined, to: span.to || undefined },
    MOST_JUDGED,
  );
  const figures: ScorerFigures[] = [];
  const lines: { id: string; losses: Float64Array }[] = [];
  for (const row of running) {
    const predictions = await readPredictions(db, row.id, row.logSeq, rows);
    lines.push({ id: row.id, losses: predictions.losses });
    figures.push(
      await figuresOf(db, row, rows, predictions, {
        headSeq: inUse.logSeq,
        capacityPerDay: terms.dailyCapacity,
      }),
    );
  }
  const fits = await listFits(db, yardstickOf(inUse));
  const fromSeq = rows[0]?.seq ?? 0;
  // The best weights are those since the first label; beside a curve that begins later they would mean nothing.
  const known = fromSeq === 1 ? fits.map(({ asOfSeq, loss }) => [asOfSeq, loss] as const) : [];
  const inForce = rows.filter(isMeasure);
  return {
    window: {
      from: input.from ?? null,
      to: input.to ?? null,
      labels: inForce.length,
      fraudulent: inForce.filter(({ holds }) => holds === 1).length,
      fromSeq,
      toSeq: rows.at(-1)?.seq ?? 0,
      leftOut,
    },
    capacityPerDay: terms.dailyCapacity,
    scorers: figures,
    curve: curveOf(rows, lines, new Map(known)),
    hindsight: fits[0]
      ? {
          labels: fits[0].labels,
          loss: fits[0].loss,
          weightBound: yardstickOf(inUse).weightBound,
          asOfSeq: fits[0].asOfSeq,
          computedAt: fits[0].computedAt.toISOString(),
        }
      : null,
  };
}

async function figuresOf(
  db: Database,
  row: typeof scorers.$inferSelect,
  rows: readonly JudgedRow[],
  predictions: Predictions,
  { headSeq, capacityPerDay }: { headSeq: number; capacityPerDay: number },
): Promise<ScorerFigures> {
  const scorer = restoreScorer(row.state);
  const { judged, lived } = judgedOf(rows, predictions, row.startedSeq);
  const cumulativeLoss = predictions.losses.reduce((sum, loss) => sum + loss, 0);
  const [fit] = await listFits(db, yardstickOf(row));
  const behindFit = fit ? await ownLossesBehind(db, row.id, fit.asOfSeq, row.logSeq) : [];
  return {
    id: row.id,
    name: row.name,
    method: scorer.method,
    role: row.role,
    options: optionsView(scorer.options),
    startedAt: (row.createdAt ?? row.changedAt).toISOString(),
    startedSeq: row.startedSeq,
    labels: scorer.labels,
    behind: Math.max(0, headSeq - row.logSeq),
    predicted: judged.labels.length,
    livedPredicted: lived,
    cumulativeLoss,
    meanLoss: predictions.count === 0 ? null : cumulativeLoss / predictions.count,
    certificate: scorer.certificate(),
    regret: regretAt(fit, row.logSeq, row.cumulativeLoss - (row.carriedLoss ?? 0), behindFit),
    ...(await inBreaths(figuresInSteps(judged, capacityPerDay))),
  };
}

/** A label that was taken away since is no measure of a prediction, nor is one that nobody found. */
const isMeasure = ({ holds, isFinding }: JudgedRow) => holds !== 0 && isFinding;

/** A label that was replaced counts as it now holds. */
function judgedOf(
  rows: readonly JudgedRow[],
  { count, probabilities }: Predictions,
  startedSeq: number,
): { judged: Judged; lived: number } {
  const chosen = rows.slice(0, count).flatMap((row, index) => (isMeasure(row) ? index : []));
  const judged: Judged = {
    probabilities: Float64Array.from(chosen, (index) => probabilities[index] as number),
    labels: Int8Array.from(chosen, (index) => (rows[index] as JudgedRow).holds),
    days: Int32Array.from(chosen, (index) => Math.floor((rows[index] as JudgedRow).at.getTime() / DAY_MS)),
  };
  const lived = chosen.filter((index) => (rows[index] as JudgedRow).seq > startedSeq).length;
  return { judged, lived };
}
