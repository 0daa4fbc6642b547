import "server-only";
import { and, asc, desc, eq, gt, isNotNull, lte } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { candidateLosses, hindsightFits } from "@/db/schema/learning";
import { labelLog } from "@/db/schema/scorers";
import { fitsOf, type Yardstick } from "./fit-hindsight";

/** The best fixed weights for the labels of the log up to a row. */
export type Hindsight = { asOfSeq: number; labels: number; loss: number; computedAt: Date };

/** Newest first. */
export function listFits(db: Executor, yardstick: Yardstick): Promise<Hindsight[]> {
  return db
    .select({
      asOfSeq: hindsightFits.asOfSeq,
      labels: hindsightFits.labels,
      loss: hindsightFits.loss,
      computedAt: hindsightFits.computedAt,
    })
    .from(hindsightFits)
    .where(fitsOf(yardstick))
    .orderBy(desc(hindsightFits.asOfSeq));
}

/** Nats lived, since the first label, beyond what the best fixed weights would have lost; over the labels of the fit. */
export type Regret = { value: number; hindsightLoss: number; asOfSeq: number; labels: number };

/**
 * @param cumulativeLoss up to row `logSeq`, in nats
 * @param lossesBehind those of the rows behind the fit, in nats
 * @returns null while the scorer has not come as far as the fit
 */
export function regretAt(
  fit: Hindsight | undefined,
  logSeq: number,
  cumulativeLoss: number,
  lossesBehind: readonly number[],
): Regret | null {
  if (!fit || logSeq < fit.asOfSeq) return null;
  const lostThen = cumulativeLoss - lossesBehind.reduce((sum, loss) => sum + loss, 0);
  const { asOfSeq, labels, loss } = fit;
  return { value: lostThen - loss, hindsightLoss: loss, asOfSeq, labels };
}

/** Losses as lived of the rows behind one; few, since the fit follows the log. */
export async function lossesLivedBehind(db: Executor, seq: number, upToSeq: number): Promise<number[]> {
  const rows = await db
    .select({ loss: labelLog.loss })
    .from(labelLog)
    .where(and(gt(labelLog.seq, seq), lte(labelLog.seq, upToSeq), isNotNull(labelLog.loss)))
    .orderBy(asc(labelLog.seq));
  return rows.map(({ loss }) => loss ?? 0);
}

/** As `lossesLivedBehind`, by a scorer's own predictions: what it did not predict beside, it predicted in use. */
export async function ownLossesBehind(
  db: Executor,
  scorerId: string,
  seq: number,
  upToSeq: number,
): Promise<number[]> {
  const rows = await db
    .select({ lived: labelLog.loss, beside: candidateLosses.loss })
    .from(labelLog)
    .leftJoin(
      candidateLosses,
      and(eq(candidateLosses.seq, labelLog.seq), eq(candidateLosses.scorerId, scorerId)),
    )
    .where(and(gt(labelLog.seq, seq), lte(labelLog.seq, upToSeq), isNotNull(labelLog.loss)))
    .orderBy(asc(labelLog.seq));
  return rows.map(({ lived, beside }) => beside ?? lived ?? 0);
}
