import "server-only";
import { and, asc, between, count, desc, eq, gt, gte, inArray, lt, lte, or, sql } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import { cases } from "@/db/schema/cases";
import { labelLog, scorers } from "@/db/schema/scorers";
import { scores, transactions } from "@/db/schema/transactions";
import { type CaseState, UNDECIDED_STATES } from "../codes";
import type { NumberGap } from "./number-gaps";
import type { CaseFacts } from "./waiting-cases";

const PAGE = 500;

export type LoggedLabel = {
  seq: number;
  place: number | null;
  label: number;
  weight: number;
  vector: Buffer;
  scorerVersion: number;
  caseId: string | null;
  personId: string | null;
  at: Date;
};

/** Where the scorer in use stands, and the rows of its label log behind a place. */
export type ScorerNews = { id: string; version: number; logSeq: number; labels: LoggedLabel[] };

/**
 * In one statement, so that the labels lead just up to where the scorer stands.
 * @throws Error on an installation without a scorer
 */
export async function readScorerNews(db: Executor, after: number, limit: number): Promise<ScorerNews> {
  const rows = await db
    .select({
      head: { id: scorers.id, version: scorers.version, logSeq: scorers.logSeq },
      label: {
        seq: labelLog.seq,
        place: labelLog.place,
        label: labelLog.label,
        weight: labelLog.weight,
        vector: labelLog.vector,
        scorerVersion: labelLog.scorerVersion,
        caseId: labelLog.caseId,
        personId: labelLog.personId,
        at: labelLog.at,
      },
    })
    .from(scorers)
    .leftJoin(labelLog, and(gt(labelLog.seq, after), lte(labelLog.seq, scorers.logSeq)))
    .where(eq(scorers.inUse, 1))
    .orderBy(asc(labelLog.seq))
    .limit(limit);
  const [first] = rows;
  if (!first) throw new Error("No scorer is in use; the installation is not set up");
  return { ...first.head, labels: rows.flatMap(({ label }) => label ?? []) };
}

/** A row that has changed, and enough of it to tell whether the ranking knows already. */
export type ChangedCase = {
  id: string;
  number: number;
  state: CaseState;
  revision: number;
  scoreId: number;
  changedAt: Date;
};

const changed = {
  id: cases.id,
  number: cases.number,
  state: cases.state,
  revision: cases.revision,
  scoreId: cases.scoreId,
  changedAt: cases.changedAt,
};

/** What the cases that changed within a second look like together: equal digests, equal cases. */
export type ChangeDigest = { second: number; digest: string };

/** Seconds since 1970, whatever zone the database's session is in. */
const secondOf = sql<number>`timestampdiff(second, '1970-01-01', ${cases.changedAt})`;

export async function readChangeDigests(db: Executor, since: Date): Promise<ChangeDigest[]> {
  const one = sql`crc32(concat_ws(' ', ${cases.id}, ${cases.state}, ${cases.revision}, ${cases.scoreId}, ${cases.changedAt}))`;
  return db
    .select({
      second: secondOf.mapWith(Number),
      digest: sql<string>`concat(count(*), ' ', bit_xor(${one}), ' ', sum(${one}))`,
    })
    .from(cases)
    .where(gte(cases.changedAt, since))
    .groupBy(secondOf);
}

/** @param seconds rising */
export async function readChangedIn(db: Executor, seconds: readonly number[]): Promise<ChangedCase[]> {
  if (seconds.length === 0) return [];
  const during = seconds.map((second) =>
    and(gte(cases.changedAt, new Date(second * 1_000)), lt(cases.changedAt, new Date((second + 1) * 1_000))),
  );
  return db
    .select(changed)
    .from(cases)
    .where(or(...during));
}

/** Cases of every state that were numbered behind `after`, in order of their numbers. */
export async function readNumberedBehind(db: Executor, after: number): Promise<ChangedCase[]> {
  return db.select(changed).from(cases).where(gt(cases.number, after)).orderBy(asc(cases.number));
}

/** Cases that have turned up in the gaps, in order of their numbers. */
export async function readNumberedIn(db: Executor, gaps: readonly NumberGap[]): Promise<ChangedCase[]> {
  if (gaps.length === 0) return [];
  return db
    .select(changed)
    .from(cases)
    .where(or(...gaps.map(({ first, last }) => between(cases.number, first, last))))
    .orderBy(asc(cases.number));
}

/** The highest numbers, rising. */
export async function readNewestNumbers(db: Executor, limit: number): Promise<number[]> {
  const rows = await db.select({ number: cases.number }).from(cases).orderBy(desc(cases.number)).limit(limit);
  return rows.map(({ number }) => number).reverse();
}

export async function readChangedAmong(db: Executor, ids: readonly string[]): Promise<ChangedCase[]> {
  const rows: ChangedCase[] = [];
  for (let from = 0; from < ids.length; from += PAGE) {
    const some = inArray(cases.id, ids.slice(from, from + PAGE));
    rows.push(...(await db.select(changed).from(cases).where(some)));
  }
  return rows;
}

const facts = {
  id: cases.id,
  number: cases.number,
  kind: cases.kind,
  state: cases.state,
  zone: cases.zone,
  channel: transactions.channel,
  externalId: transactions.externalId,
  accountId: transactions.accountId,
  assignedTo: cases.assignedTo,
  claimedBy: cases.claimedBy,
  claimExpiresAt: cases.claimExpiresAt,
  waitUntil: cases.waitUntil,
  escalatedAt: cases.escalatedAt,
  dueAt: cases.dueAt,
  holdExpiresAt: transactions.holdExpiresAt,
  paymentState: transactions.paymentState,
  amountMinor: transactions.amountMinor,
  amountBaseMinor: transactions.amountBaseMinor,
  revision: cases.revision,
  scoreId: cases.scoreId,
  changedAt: cases.changedAt,
};

type FactsRow = Omit<CaseFacts, "holdExpiresAt" | "amountBaseMinor"> & {
  holdExpiresAt: Date | null;
  paymentState: string;
  amountMinor: number;
  amountBaseMinor: number | null;
};

function toFacts({ paymentState, amountMinor, amountBaseMinor, holdExpiresAt, ...row }: FactsRow): CaseFacts {
  return {
    ...row,
    holdExpiresAt: paymentState === "held" ? holdExpiresAt : null,
    // Without a rate the amount counts as it stands, rather than not at all.
    amountBaseMinor: amountBaseMinor ?? amountMinor,
  };
}

export async function readFacts(db: Executor, ids: readonly string[]): Promise<CaseFacts[]> {
  if (ids.length === 0) return [];
  const rows = await db
    .select(facts)
    .from(cases)
    .innerJoin(transactions, eq(transactions.id, cases.transactionId))
    .where(inArray(cases.id, [...ids]));
  return rows.map(toFacts);
}

export type PlacedCase = { facts: CaseFacts; vector: Float64Array };

export async function readPlaced(db: Executor, ids: readonly string[]): Promise<PlacedCase[]> {
  if (ids.length === 0) return [];
  const rows = await db
    .select({ facts, vector: scores.vector })
    .from(cases)
    .innerJoin(transactions, eq(transactions.id, cases.transactionId))
    .innerJoin(scores, eq(scores.id, cases.scoreId))
    .where(and(inArray(cases.id, [...ids]), inArray(cases.state, [...UNDECIDED_STATES])));
  return rows.map((row) => ({ facts: toFacts(row.facts), vector: bytesToVector(row.vector) }));
}

export async function countWaiting(db: Executor): Promise<number> {
  const [row] = await db
    .select({ count: count() })
    .from(cases)
    .where(inArray(cases.state, [...UNDECIDED_STATES]));
  return row?.count ?? 0;
}

/** Ids of cases that wait for a verdict, behind `afterNumber` in order of arrival. */
export async function readWaitingIds(
  db: Executor,
  afterNumber: number,
  limit: number,
): Promise<{ id: string; number: number }[]> {
  return (
    db
      .select({ id: cases.id, number: cases.number })
      // By number, whatever the statistics say: sorting all waiting cases for every page would be quadratic.
      .from(cases, { forceIndex: ["cases_number_unique"] })
      .where(and(gt(cases.number, afterNumber), inArray(cases.state, [...UNDECIDED_STATES])))
      .orderBy(asc(cases.number))
      .limit(limit)
  );
}
