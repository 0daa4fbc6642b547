import "server-only";
import { and, desc, eq, gte, lte, sql } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { policyCuts } from "@/db/schema/policies";
import { scores, transactions } from "@/db/schema/transactions";
import { logitOf } from "../decibans";
import { capacityCut, type ScoredArrival } from "./capacity-cut";
import type { PolicyInForce } from "./read";
import type { Thresholds } from "./rules";

/** Newest arrival scores that a cut is taken from; a batch is in with all of its scores or with none. */
const SCORES_IN_CUT = 20_000;
/** With fewer, a cut would be chance. */
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
  const recent = await recentArrivals(db);
  const enough = recent.length >= FEWEST_SCORES;
  return withReviewLine(policy, enough ? capacityCut(recent, wish.casesPerDay) : CUT_WITHOUT_SCORES);
}

/**
 * As `thresholdsInForce`, after taking a new cut where the last one is ten minutes or a thousand arrivals old.
 * Intake calls it once a batch before zoning; `batch` stands in while the database has too few scores.
 */
export async function refreshCut(
  db: Executor,
  policy: PolicyInForce,
  now: Date,
  batch: readonly ScoredArrival[] = [],
): Promise<Thresholds> {
  const wish = policy.terms.reviewThreshold;
  if (wish.kind === "fixed") return withReviewLine(policy, logitOf(wish.probability));
  const last = await findNewestCut(db, policy.version, now);
  if (last && !isStale(last, now)) return withReviewLine(policy, last.logit);
  const recent = await recentArrivals(db);
  const taken = recent.length >= FEWEST_SCORES ? recent : batch;
  if (taken.length < FEWEST_SCORES) return withReviewLine(policy, last?.logit ?? CUT_WITHOUT_SCORES);
  const logit = capacityCut(taken, wish.casesPerDay);
  const lastScoreId = recent.reduce((newest, score) => Math.max(newest, score.id), 0);
  const cut = { logit, scoreCount: taken.length, lastScoreId };
  await db
    .insert(policyCuts)
    .values({ policyVersion: policy.version, computedAt: now, ...cut })
    .onDuplicateKeyUpdate({ set: cut });
  return withReviewLine(policy, logit);
}

function withReviewLine(policy: PolicyInForce, reviewLogit: number): Thresholds {
  return { reviewLogit, holdLogit: Math.max(logitOf(policy.terms.holdThreshold), reviewLogit) };
}

type Cut = { logit: number; computedAt: Date; newScores: number };

async function findNewestCut(db: Executor, version: number, now: Date): Promise<Cut | undefined> {
  const [cut] = await db
    .select({
      logit: policyCuts.logit,
      computedAt: policyCuts.computedAt,
      newScores: sql<number>`(select count(*) from ${scores} where ${scores.kind} = 'arrival' and ${scores.id} > ${policyCuts.lastScoreId})`,
    })
    .from(policyCuts)
    .where(and(eq(policyCuts.policyVersion, version), lte(policyCuts.computedAt, now)))
    .orderBy(desc(policyCuts.computedAt))
    .limit(1);
  return cut;
}

function isStale(cut: Cut, now: Date): boolean {
  const ageMs = now.getTime() - cut.computedAt.getTime();
  return cut.newScores >= NEW_SCORES_FOR_A_NEW_CUT || ageMs >= LONGEST_CUT_AGE_MS;
}

async function recentArrivals(db: Executor): Promise<(ScoredArrival & { id: number })[]> {
  const oldest = sql`coalesce((select b.taken_at from ${scores} b where b.kind = 'arrival'
    order by b.taken_at desc limit 1 offset ${sql.raw(String(SCORES_IN_CUT - 1))}), '1000-01-01')`;
  return db
    .select({ id: scores.id, logit: scores.logit, occurredAt: transactions.occurredAt })
    .from(scores)
    .innerJoin(transactions, eq(transactions.id, scores.transactionId))
    .where(and(eq(scores.kind, "arrival"), gte(scores.takenAt, oldest)));
}
