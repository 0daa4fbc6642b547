import "server-only";
import { and, eq, isNull, ne } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases, decisions, ledger } from "@/db/schema/cases";
import { transactions } from "@/db/schema/transactions";
import type { Typology, Verdict } from "../decisions/codes";
import type { PolicyTerms } from "../policy/schema";
import { settleRecoveries } from "./recoveries";
import { isOutcomeLabel, type LedgerRow, reverseLines, standingAmong } from "./reverse";
import { type LedgerLine, ledgerLine, NOTHING_BOOKED } from "./rules";

type CostTerms = Pick<PolicyTerms, "reviewCostMinorPerHour" | "lostMargin">;

export type DecisionBooking = {
  decisionId: string;
  caseId: string;
  transactionId: string;
  verdict: Verdict;
  typology: Typology | null;
  /** It stands instead of what an outcome said of the payment. */
  overrulesOutcome?: boolean;
  handlingSeconds: number;
  /** Terms of the policy that the decision falls under. */
  terms: CostTerms;
  bookedAt: Date;
};

/**
 * Books the ledger line of a decision or correction that is already inserted, inside its transaction. Reads the
 * amount and where the money is from the transaction as it stands, so a disposition must not be written before.
 * Where an outcome has labelled the payment, a plain decision books its review cost alone; one that overrules the
 * outcome, and a correction, take the outcome's line back first.
 * @throws Error where the transaction does not exist
 */
export async function bookDecision(tx: Tx, booking: DecisionBooking): Promise<LedgerLine> {
  const { payment, lines } = await bookedSoFarOrThrow(tx, booking.transactionId);
  const wasPassed = payment.action === "pass" || (await wasDecidedLegitimate(tx, lines, booking));
  const whole = ledgerLine({ ...booking, ...payment, wasPassed });
  const byOutcome = standingAmong(lines).filter(isOutcomeLabel);
  const yields =
    byOutcome.length > 0 && !booking.overrulesOutcome && (await isPlainDecision(tx, booking.decisionId));
  if (!yields) await reverseLines(tx, byOutcome, booking.bookedAt, "nothing");
  const line = yields ? { ...NOTHING_BOOKED, reviewCostMinor: whole.reviewCostMinor } : whole;
  await tx.insert(ledger).values({
    ...line,
    transactionId: booking.transactionId,
    decisionId: booking.decisionId,
    bookedAt: booking.bookedAt,
    occurredAt: payment.occurredAt,
    typology: yields ? null : booking.typology,
    detail: { verdict: booking.verdict, paymentState: payment.paymentState, wasPassed },
  });
  if (!yields)
    await settleRecoveries(tx, { ...booking, ...payment, lines }, isFraud(booking), booking.bookedAt);
  return line;
}

export type OutcomeBooking = {
  outcomeId: string;
  transactionId: string;
  verdict: "fraudulent" | "legitimate";
  typology: Typology | null;
  terms: CostTerms;
  bookedAt: Date;
};

/**
 * Books the label that an outcome brought: takes back the money of whatever finding stood before, while the cost of
 * reviewing it stays, and books the payment anew. Call it only where the label changed.
 */
export async function bookOutcome(tx: Tx, booking: OutcomeBooking): Promise<LedgerLine> {
  const { transactionId, bookedAt } = booking;
  const { payment, lines } = await bookedSoFarOrThrow(tx, transactionId);
  const wasPassed = payment.action === "pass" || (await wasDecidedLegitimate(tx, lines, { transactionId }));
  const findings = standingAmong(lines).filter((row) => row.recoveredMinor === 0);
  await reverseLines(tx, findings, bookedAt, "review_cost");
  const line = ledgerLine({ ...booking, ...payment, wasPassed, handlingSeconds: 0 });
  await tx.insert(ledger).values({
    ...line,
    transactionId,
    outcomeId: booking.outcomeId,
    bookedAt,
    occurredAt: payment.occurredAt,
    typology: booking.typology,
    detail: { verdict: booking.verdict, paymentState: payment.paymentState, wasPassed },
  });
  await settleRecoveries(tx, { transactionId, ...payment, lines }, isFraud(booking), bookedAt);
  return line;
}

/**
 * Takes back what a decision booked, by a line of the opposite sign; a second call changes nothing. The review cost
 * is the caller's question: it stays where the time was spent whatever came of it.
 */
export async function reverseBooking(
  tx: Tx,
  decisionId: string,
  bookedAt: Date,
  keep: "nothing" | "review_cost" = "nothing",
): Promise<void> {
  const rows = await tx.select().from(ledger).where(eq(ledger.decisionId, decisionId));
  await reverseLines(tx, standingAmong(rows), bookedAt, keep);
}

const isFraud = (finding: { verdict: Verdict }) => finding.verdict === "fraudulent";

/** The payment as it stands and all its lines, in one statement: every decision waits for it. */
async function bookedSoFarOrThrow(tx: Tx, transactionId: string) {
  const rows = await tx
    .select({
      payment: {
        amountBaseMinor: transactions.amountBaseMinor,
        paymentState: transactions.paymentState,
        action: transactions.action,
        occurredAt: transactions.occurredAt,
      },
      line: ledger,
    })
    .from(transactions)
    .leftJoin(ledger, eq(ledger.transactionId, transactions.id))
    .where(eq(transactions.id, transactionId));
  const [first] = rows;
  if (!first) throw new Error("A loss can only be booked for a transaction that exists");
  return { payment: first.payment, lines: rows.flatMap(({ line }) => line ?? []) };
}

/** A verdict of "legitimate" other than this one was given on the payment and not taken back as a slip. */
async function wasDecidedLegitimate(
  tx: Tx,
  lines: readonly LedgerRow[],
  { transactionId, decisionId }: { transactionId: string; decisionId?: string },
): Promise<boolean> {
  // Every verdict books a line: where there is none there was no verdict.
  if (lines.length === 0) return false;
  const [earlier] = await tx
    .select({ id: decisions.id })
    .from(decisions)
    .innerJoin(cases, eq(cases.id, decisions.caseId))
    .where(
      and(
        eq(cases.transactionId, transactionId),
        decisionId ? ne(decisions.id, decisionId) : undefined,
        eq(decisions.verdict, "legitimate"),
        isNull(decisions.undoneAt),
      ),
    )
    .limit(1);
  return earlier !== undefined;
}

async function isPlainDecision(tx: Tx, decisionId: string): Promise<boolean> {
  const [row] = await tx.select({ kind: decisions.kind }).from(decisions).where(eq(decisions.id, decisionId));
  return row?.kind === "decision" || row?.kind === "second_review";
}
