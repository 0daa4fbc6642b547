import "server-only";
import { and, count, desc, eq, gt, lte } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { policyCuts } from "@/db/schema/policies";
import { scores } from "@/db/schema/transactions";
import { logitOf } from "../decibans";
import { capacityCut, type ScoredArrival } from "./capacity-cut";
import type { PolicyInForce } from "./read";
import { cutByScorer, cutOfRecent, newestScores, type ScorerInUse } from "./recent-scores";
import type { Thresholds } from "./rules";

/** Newest arrival scores that a cut is taken from. */
const SCORES_IN_CUT = 20_000;
/** With fewer scores, a cut would be chance. */
const FEWEST_SCORES = 200;
const NEW_SCORES_FOR_A_NEW_CUT = 1_000;
const LONGEST_CUT_AGE_MS = 10 * 60_000;
/** Even odds, until there are scores to take a cut from. */
const CUT_WITHOUT_SCORES = 0;

/**
 * The two lines on the axis under this policy, in nats. By capacity: the newest cut up to `now`, or, before the
 * first one is stored, the cut that the recent scores give.
 */
export async function thresholdsInForce(db: Executor, policy: PolicyInForce, now: Date): Promise<Thresholds> {
  const wish = policy.terms.reviewThreshold;
  if (wish.kind === "fixed") return withReviewLine(policy, logitOf(wish.probability));
  const cut = await findNewestCut(db, policy.version, now);
  if (cut) return withReviewLine(policy, cut.logit);
  const recent = await newestScores(db, SCORES_IN_CUT);
  const enough = recent.count >= FEWEST_SCORES;
  return withReviewLine(
    policy,
    enough ? await cutOfRecent(db, recent, wish.casesPerDay) : CUT_WITHOUT_SCORES,
  );
}

/**
 * As `thresholdsInForce`, after taking a new cut by the scorer in use where the last one is ten minutes or a
 * thousand arrivals old.
 * Intake calls it once a batch before zoning; `batch` stands in while the database has too few scores.
 */
export async function refreshCut(
  db: Executor,
  policy: PolicyInForce,
  now: Date,
  held: ScorerInUse,
  batch: readonly ScoredArrival[] = [],
): Promise<Thresholds> {
  const wish = policy.terms.reviewThreshold;
  if (wish.kind === "fixed") return withReviewLine(policy, logitOf(wish.probability));
  const last = await findNewestCut(db, policy.version, now);
  if (last && !(await isStale(db, last, now))) return withReviewLine(policy, last.logit);
  return takeCut(db, policy, wish.casesPerDay, now, held, last?.logit, batch);
}

/** As `refreshCut`, however young the last cut is: another scorer has come into use. */
export async function takeNewCut(
  db: Executor,
  policy: PolicyInForce,
  now: Date,
  held: ScorerInUse,
): Promise<Thresholds> {
  const wish = policy.terms.reviewThreshold;
  if (wish.kind === "fixed") return withReviewLine(policy, logitOf(wish.probability));
  const last = await findNewestCut(db, policy.version, now);
  return takeCut(db, policy, wish.casesPerDay, now, held, last?.logit);
}

async function takeCut(
  db: Executor,
  policy: PolicyInForce,
  casesPerDay: number,
  now: Date,
  held: ScorerInUse,
  lastLogit = CUT_WITHOUT_SCORES,
  batch: readonly ScoredArrival[] = [],
): Promise<Thresholds> {
  const recent = await newestScores(db, SCORES_IN_CUT);
  const fromRecent = recent.count >= FEWEST_SCORES;
  const scoreCount = fromRecent ? recent.count : batch.length;
  if (scoreCount < FEWEST_SCORES) return withReviewLine(policy, lastLogit);
  const logit = fromRecent
    ? await cutByScorer(db, recent, casesPerDay, held)
    : capacityCut(batch, casesPerDay);
  const cut = { logit, scoreCount, lastScoreId: recent.lastScoreId };
  await db
    .insert(policyCuts)
    .values({ policyVersion: policy.version, computedAt: now, ...cut })
    .onDuplicateKeyUpdate({ set: cut });
  return withReviewLine(policy, logit);
}

function withReviewLine(policy: PolicyInForce, reviewLogit: number): Thresholds {
  return { reviewLogit, holdLogit: Math.max(logitOf(policy.terms.holdThreshold), reviewLogit) };
}

type Cut = { logit: number; computedAt: Date; lastScoreId: number };

async function findNewestCut(db: Executor, version: number, now: Date): Promise<Cut | undefined> {
  const [cut] = await db
    .select({
      logit: policyCuts.logit,
      computedAt: policyCuts.computedAt,
      lastScoreId: policyCuts.lastScoreId,
    })
    .from(policyCuts)
    .where(and(eq(policyCuts.policyVersion, version), lte(policyCuts.computedAt, now)))
    .orderBy(desc(policyCuts.computedAt))
    .limit(1);
  return cut;
}

async function isStale(db: Executor, cut: Cut, now: Date): Promise<boolean> {
  if (now.getTime() - cut.computedAt.getTime() >= LONGEST_CUT_AGE_MS) return true;
  const [arrived] = await db
    .select({ count: count() })
    .from(scores, { forceIndex: "PRIMARY" })
    .where(and(eq(scores.kind, "arrival"), gt(scores.id, cut.lastScoreId)));
  return (arrived?.count ?? 0) >= NEW_SCORES_FOR_A_NEW_CUT;
}
