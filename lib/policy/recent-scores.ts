import "server-only";
import { setImmediate } from "node:timers/promises";
import { and, count, desc, eq, gte, max, type SQL, sql } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { scores, transactions } from "@/db/schema/transactions";
import { natsToDecibans } from "../decibans";
import type { Scorer } from "../scorer";
import { fitVectors } from "../signals/read-signal-set";
import type { SignalSet } from "../signals/signal-set";
import { cutBelow, daysSpanned } from "./capacity-cut";
import type { ScoreHistogram } from "./schema";

/** Enough times of payments to know how many days they span. */
const TIMES_READ = 2_000;
const BIN_DECIBANS = 0.5;
/** The optimizer would rather scan the whole table, vectors and all. */
const NEWEST_FIRST = { forceIndex: "scores_recent" };

export type RecentScores = { where: SQL | undefined; count: number; lastScoreId: number };

/** The newest `atMost` arrival scores, and the condition that finds them. A batch is in whole or not at all. */
export async function newestScores(db: Executor, atMost: number, since?: Date): Promise<RecentScores> {
  const recent = and(eq(scores.kind, "arrival"), since && gte(scores.takenAt, since));
  const [oldest] = await db
    .select({ takenAt: scores.takenAt })
    .from(scores, NEWEST_FIRST)
    .where(recent)
    .orderBy(desc(scores.takenAt))
    .limit(1)
    .offset(atMost - 1);
  const where = oldest ? and(recent, gte(scores.takenAt, oldest.takenAt)) : recent;
  const [all] = await db
    .select({ count: count(), lastScoreId: max(scores.id) })
    .from(scores, NEWEST_FIRST)
    .where(where);
  return { where, count: all?.count ?? 0, lastScoreId: all?.lastScoreId ?? 0 };
}

/** Days that the scored payments span, by when they happened; at least one score. */
async function daysOf(db: Executor, recent: RecentScores): Promise<number> {
  const everyNth = Math.max(1, Math.floor(recent.count / TIMES_READ));
  const times = await db
    .select({ occurredAt: transactions.occurredAt })
    .from(scores, NEWEST_FIRST)
    .innerJoin(transactions, eq(transactions.id, scores.transactionId))
    // By a hash of the number: an auto-increment may go in steps.
    .where(and(recent.where, sql`crc32(${scores.id}) % ${everyNth} = 0`));
  return daysSpanned(times.map(({ occurredAt }) => occurredAt.getTime()));
}

/** The review line, in nats, that would have yielded the wished number of cases a day; at least one score. */
export async function cutOfRecent(db: Executor, recent: RecentScores, casesPerDay: number): Promise<number> {
  const wished = Math.round(casesPerDay * (await daysOf(db, recent)));
  const highest = await db
    .select({ logit: scores.logit })
    .from(scores, NEWEST_FIRST)
    .where(recent.where)
    .orderBy(desc(scores.logit))
    .limit(wished + 1);
  return cutBelow(
    highest.map(({ logit }) => logit),
    wished,
  );
}

/** Payments above the line that a cut must rest on, so that one of them more or less hardly moves it. */
const CASES_IN_CUT = 100;
const FEWEST_RESCORED = 2_000;
const RESCORED_IN_A_ROW = 200;

/** The scorer, the version of its state and the signals that it reads. */
export type ScorerInUse = { scorer: Scorer; version: number; signals: SignalSet };

/**
 * As `cutOfRecent`, on the scores that the newest payments would get from the scorer as it is now. Scores given at
 * arrival lag behind a scorer that learns: while its evidence falls, a cut taken from them yields too few cases.
 */
export async function cutByScorer(
  db: Executor,
  recent: RecentScores,
  casesPerDay: number,
  { scorer, version, signals }: ScorerInUse,
): Promise<number> {
  // Nothing learned since the oldest of them, as during an import: they are its scores already.
  if ((await oldestVersion(db, recent)) === version) return cutOfRecent(db, recent, casesPerDay);
  const share = Math.min(1, (casesPerDay * (await daysOf(db, recent))) / recent.count);
  const rows = await db
    .select({ transactionId: scores.transactionId, vector: scores.vector })
    .from(scores, NEWEST_FIRST)
    .where(recent.where)
    .orderBy(desc(scores.takenAt), desc(scores.id))
    .limit(Math.min(recent.count, Math.max(FEWEST_RESCORED, Math.ceil(CASES_IN_CUT / share))));
  const logits: number[] = [];
  for (let from = 0; from < rows.length; from += RESCORED_IN_A_ROW) {
    const vectors = await fitVectors(db, signals, rows.slice(from, from + RESCORED_IN_A_ROW));
    for (const vector of vectors) logits.push(scorer.score(vector).logit);
    await setImmediate();
  }
  const wished = Math.round(share * rows.length);
  return cutBelow(logits.sort((a, b) => b - a).slice(0, wished + 1), wished);
}

/** Versions only grow, so all of the scores are of the oldest one's or later. */
async function oldestVersion(db: Executor, recent: RecentScores): Promise<number | undefined> {
  const [oldest] = await db
    .select({ version: scores.scorerVersion })
    .from(scores, NEWEST_FIRST)
    .where(recent.where)
    .orderBy(scores.takenAt)
    .limit(1);
  return oldest?.version;
}

export async function histogramOf(db: Executor, recent: RecentScores): Promise<ScoreHistogram> {
  if (recent.count === 0) return { count: 0, days: 0, binDecibans: BIN_DECIBANS, bins: [] };
  const bin = sql<number>`cast(floor(${scores.logit} * ${natsToDecibans(1) / BIN_DECIBANS}) as signed)`;
  const bins = await db
    .select({ bin: bin.as("bin"), count: count() })
    .from(scores, NEWEST_FIRST)
    .where(recent.where)
    .groupBy(sql`bin`)
    .orderBy(sql`bin`);
  return { count: recent.count, days: await daysOf(db, recent), binDecibans: BIN_DECIBANS, bins };
}
