import "server-only";
import { and, count, desc, eq, gte, max, type SQL, sql } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { scores, transactions } from "@/db/schema/transactions";
import { natsToDecibans } from "../decibans";
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
