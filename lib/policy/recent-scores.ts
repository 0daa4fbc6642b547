import "server-only";
import { and, count, desc, eq, gte, max, type SQL, sql } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { scores, transactions } from "@/db/schema/transactions";
import { cutBelow, daysSpanned } from "./capacity-cut";

/** Newest arrival scores that a cut is taken from; a batch is in with all of its scores or with none. */
const SCORES_IN_CUT = 20_000;
/** Enough times of payments to know how many days they span. */
const TIMES_READ = 2_000;
/** The optimizer would rather scan the whole table, vectors and all. */
const NEWEST_FIRST = { forceIndex: "scores_recent" };

export type RecentScores = { where: SQL | undefined; count: number; lastScoreId: number };

/** The newest arrival scores: their number and the condition that finds them. */
export async function newestScores(db: Executor): Promise<RecentScores> {
  const arrival = eq(scores.kind, "arrival");
  const [oldest] = await db
    .select({ takenAt: scores.takenAt })
    .from(scores, NEWEST_FIRST)
    .where(arrival)
    .orderBy(desc(scores.takenAt))
    .limit(1)
    .offset(SCORES_IN_CUT - 1);
  const where = oldest ? and(arrival, gte(scores.takenAt, oldest.takenAt)) : arrival;
  const [all] = await db
    .select({ count: count(), lastScoreId: max(scores.id) })
    .from(scores, NEWEST_FIRST)
    .where(where);
  return { where, count: all?.count ?? 0, lastScoreId: all?.lastScoreId ?? 0 };
}

/** The review line, in nats, that would have yielded the wished number of cases a day; at least one score. */
export async function cutOfRecent(db: Executor, recent: RecentScores, casesPerDay: number): Promise<number> {
  const everyNth = Math.max(1, Math.floor(recent.count / TIMES_READ));
  const times = await db
    .select({ occurredAt: transactions.occurredAt })
    .from(scores, NEWEST_FIRST)
    .innerJoin(transactions, eq(transactions.id, scores.transactionId))
    // By a hash of the number: an auto-increment may go in steps.
    .where(and(recent.where, sql`crc32(${scores.id}) % ${everyNth} = 0`));
  const wished = Math.round(casesPerDay * daysSpanned(times.map(({ occurredAt }) => occurredAt.getTime())));
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
