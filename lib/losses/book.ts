import "server-only";
import { and, eq, isNull, ne, sql } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { decisions, ledger } from "@/db/schema/cases";
import { transactions } from "@/db/schema/transactions";
import type { Typology, Verdict } from "../decisions/codes";
import type { PolicyTerms } from "../policy/schema";
import { type LedgerLine, ledgerLine, reversed } from "./rules";

export type DecisionBooking = {
  decisionId: string;
  caseId: string;
  transactionId: string;
  verdict: Verdict;
  typology: Typology | null;
  handlingSeconds: number;
  /** Terms of the policy that the decision falls under. */
  terms: Pick<PolicyTerms, "reviewCostMinorPerHour" | "lostMargin">;
  bookedAt: Date;
};

/**
 * Books the ledger line of a decision or correction that is already inserted, inside its transaction. Reads the
 * amount and where the money is from the transaction as it stands, so a disposition must not be written before.
 * @throws Error where the transaction does not exist
 */
export async function bookDecision(tx: Tx, booking: DecisionBooking): Promise<LedgerLine> {
  const payment = await paymentOrThrow(tx, booking.transactionId);
  const wasPassed = payment.action === "pass" || (await wasDecidedLegitimate(tx, booking));
  const line = ledgerLine({ ...booking, ...payment, wasPassed });
  await tx.insert(ledger).values({
    ...line,
    transactionId: booking.transactionId,
    decisionId: booking.decisionId,
    bookedAt: booking.bookedAt,
    occurredAt: payment.occurredAt,
    typology: booking.typology,
    detail: { verdict: booking.verdict, paymentState: payment.paymentState, wasPassed },
  });
  return line;
}

/**
 * Takes back what a decision booked, by a line of the opposite sign; booking it twice changes nothing. An undo
 * returns everything, since the next decision on the case carries the whole handling time. A correction keeps the
 * review cost: that time was spent.
 */
export async function reverseBooking(
  tx: Tx,
  decisionId: string,
  bookedAt: Date,
  keep: "nothing" | "review_cost" = "nothing",
): Promise<void> {
  await reverseLines(tx, eq(ledger.decisionId, decisionId), bookedAt, keep);
}

async function reverseLines(
  tx: Tx,
  which: ReturnType<typeof eq>,
  bookedAt: Date,
  keep: "nothing" | "review_cost",
): Promise<void> {
  const rows = await tx
    .select()
    .from(ledger)
    .where(
      and(
        which,
        isNull(ledger.reversesId),
        sql`not exists (select 1 from ledger as later where later.reverses_id = ${ledger.id})`,
      ),
    );
  for (const { id, detail: _, ...row } of rows) {
    const line = reversed(row);
    await tx.insert(ledger).values({
      ...row,
      ...line,
      reviewCostMinor: keep === "review_cost" ? 0 : line.reviewCostMinor,
      reversesId: id,
      bookedAt,
    });
  }
}

async function paymentOrThrow(tx: Tx, transactionId: string) {
  const [payment] = await tx
    .select({
      amountBaseMinor: transactions.amountBaseMinor,
      paymentState: transactions.paymentState,
      action: transactions.action,
      occurredAt: transactions.occurredAt,
    })
    .from(transactions)
    .where(eq(transactions.id, transactionId));
  if (!payment) throw new Error("A loss can only be booked for a transaction that exists");
  return payment;
}

async function wasDecidedLegitimate(
  tx: Tx,
  booking: { caseId: string; decisionId: string },
): Promise<boolean> {
  const [earlier] = await tx
    .select({ id: decisions.id })
    .from(decisions)
    .where(
      and(
        eq(decisions.caseId, booking.caseId),
        ne(decisions.id, booking.decisionId),
        eq(decisions.verdict, "legitimate"),
        isNull(decisions.undoneAt),
      ),
    )
    .limit(1);
  return earlier !== undefined;
}
