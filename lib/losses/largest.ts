import "server-only";
import { desc, eq, isNotNull, sql } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { cases, ledger } from "@/db/schema/cases";
import { transactions } from "@/db/schema/transactions";
import type { Typology } from "../decisions/codes";
import type { Channel } from "../transactions/codes";
import { sum } from "./sum";
import { linesOf, type Span } from "./week-sums";

export type LargestCase = {
  /** Null where an outcome labelled a payment that never had a case. */
  caseId: string | null;
  number: number | null;
  transactionId: string;
  externalId: string;
  channel: Channel;
  attemptedMinor: bigint;
  preventedMinor: bigint;
};

export type TypologyFigures = {
  typology: Typology;
  /** Findings that stand: one for each line, less one for each line taken back. */
  findings: number;
  attemptedMinor: bigint;
  preventedMinor: bigint;
};

/** The fraudulent payments of the highest value; equal ones in order of arrival. */
export async function listLargestCases(db: Executor, span: Span, limit: number): Promise<LargestCase[]> {
  const attempted = sum(ledger.attemptedMinor);
  return db
    .select({
      caseId: cases.id,
      number: cases.number,
      transactionId: transactions.id,
      externalId: transactions.externalId,
      channel: transactions.channel,
      attemptedMinor: attempted,
      preventedMinor: sum(ledger.preventedMinor),
    })
    .from(ledger)
    .innerJoin(transactions, eq(transactions.id, ledger.transactionId))
    .leftJoin(cases, eq(cases.transactionId, ledger.transactionId))
    .where(linesOf(span))
    .groupBy(transactions.id, transactions.seq, cases.id, cases.number)
    .having(sql`${attempted} > 0`)
    .orderBy(desc(attempted), transactions.seq)
    .limit(limit);
}

export async function listTypologies(db: Executor, span: Span): Promise<TypologyFigures[]> {
  const rows = await db
    .select({
      typology: ledger.typology,
      findings: sql`sum(case when ${ledger.reversesId} is null then 1 else -1 end)`.mapWith(Number),
      attemptedMinor: sum(ledger.attemptedMinor),
      preventedMinor: sum(ledger.preventedMinor),
    })
    .from(ledger)
    .where(sql`${linesOf(span)} and ${isNotNull(ledger.typology)}`)
    .groupBy(ledger.typology);
  return rows
    .flatMap(({ typology, ...figures }) =>
      typology && figures.findings > 0 ? [{ typology, ...figures }] : [],
    )
    .sort(highestFirst);
}

function highestFirst(a: TypologyFigures, b: TypologyFigures): number {
  if (a.attemptedMinor === b.attemptedMinor) return a.typology.localeCompare(b.typology);
  return a.attemptedMinor < b.attemptedMinor ? 1 : -1;
}
