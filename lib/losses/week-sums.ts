import "server-only";
import { and, eq, gte, isNull, lt, notInArray, sql } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { cases, decisions, ledger } from "@/db/schema/cases";
import { transactions } from "@/db/schema/transactions";
import type { WeekInterval } from "./iso-week";
import { count, sum } from "./sum";
import type { WeekSums } from "./totals";

/** By the payments that took place in the week, or by what was booked in it. */
export type By = "transaction" | "booking";

export type Span = WeekInterval & {
  by: By;
  /** Only what was known before this moment: weeks are compared at equal age. */
  knownAt: Date;
};

/** Lines of the ledger that belong to the span. */
export function linesOf({ start, end, by, knownAt }: Span) {
  const moment = by === "transaction" ? ledger.occurredAt : ledger.bookedAt;
  return and(gte(moment, start), lt(moment, end), lt(ledger.bookedAt, knownAt));
}

/** All that is added up for a week, in three queries over indexed intervals. */
export async function readWeekSums(db: Executor, span: Span): Promise<WeekSums> {
  const [money, volume, verdicts] = await Promise.all([
    sumLedger(db, span),
    sumPayments(db, span),
    countVerdicts(db, span),
  ]);
  return { ...money, ...volume, ...verdicts };
}

async function sumLedger(db: Executor, span: Span) {
  const [row] = await db
    .select({
      attemptedMinor: sum(ledger.attemptedMinor),
      preventedMinor: sum(ledger.preventedMinor),
      missedMinor: sum(ledger.missedMinor),
      recoveredMinor: sum(ledger.recoveredMinor),
      falsePositiveMinor: sum(ledger.falsePositiveMinor),
      lostMarginMinor: sum(ledger.lostMarginMinor),
      reviewCostMinor: sum(ledger.reviewCostMinor),
    })
    .from(ledger)
    .where(linesOf(span));
  return rowOrThrow(row);
}

/** Volume is by the payments' own time in both views: a rate needs a denominator of one week. */
async function sumPayments(db: Executor, { start, end, knownAt }: Span) {
  const [row] = await db
    .select({
      payments: count(),
      unpriced: count(isNull(transactions.amountBaseMinor)),
      settledMinor: sum(
        transactions.amountBaseMinor,
        notInArray(transactions.paymentState, ["held", "refused"]),
      ),
    })
    .from(transactions)
    .where(
      and(
        gte(transactions.occurredAt, start),
        lt(transactions.occurredAt, end),
        lt(transactions.occurredAt, knownAt),
      ),
    );
  return rowOrThrow(row);
}

async function countVerdicts(db: Executor, { start, end, by, knownAt }: Span) {
  const moment = by === "transaction" ? transactions.occurredAt : decisions.decidedAt;
  const isAlert = eq(cases.kind, "alert");
  const isFraud = eq(decisions.verdict, "fraudulent");
  const [row] = await db
    .select({
      fraudulent: count(isFraud),
      legitimate: count(eq(decisions.verdict, "legitimate")),
      customerMisuse: count(eq(decisions.verdict, "customer_misuse")),
      alertsDecided: count(isAlert),
      alertsFraudulent: count(and(isAlert, isFraud)),
    })
    .from(decisions)
    .innerJoin(cases, eq(cases.id, decisions.caseId))
    .innerJoin(transactions, eq(transactions.id, decisions.transactionId))
    .where(
      and(
        gte(moment, start),
        lt(moment, end),
        lt(decisions.decidedAt, knownAt),
        isNull(decisions.undoneAt),
        // A verdict that was replaced later stood until then.
        sql`(${decisions.supersededAt} is null or ${decisions.supersededAt} >= ${knownAt})`,
      ),
    );
  return rowOrThrow(row);
}

/** An aggregate without groups has exactly one row. */
function rowOrThrow<T>(row: T | undefined): T {
  if (!row) throw new Error("The database returned no row for a sum");
  return row;
}
