import type { Verdict } from "../decisions/codes";
import type { PolicyTerms } from "../policy/schema";
import type { PAYMENT_STATES } from "../transactions/codes";
import { divideHalfEven, shareOfAmount } from "./rounding";

type PaymentState = (typeof PAYMENT_STATES)[number];

/** Money of one ledger row: signed integers in minor units of the base currency. */
export type LedgerLine = {
  /** Value whose label is fraudulent. */
  attemptedMinor: number;
  /** The part of it that was held or refused; gross loss is attempted − prevented. */
  preventedMinor: number;
  /** The part of gross that had been passed, or decided legitimate, before. */
  missedMinor: number;
  recoveredMinor: number;
  /** Legitimate value held or refused, and the margin lost on it. */
  falsePositiveMinor: number;
  lostMarginMinor: number;
  /** Handling time × rate. */
  reviewCostMinor: number;
};

export type Finding = {
  verdict: Verdict;
  /** Null while no exchange rate is known: then only the cost of review is booked. */
  amountBaseMinor: number | null;
  /** Where the money was when the finding was made. */
  paymentState: PaymentState;
  /** The payment had been let through as unsuspicious, or decided legitimate, before this finding. */
  wasPassed: boolean;
  handlingSeconds: number;
  terms: Pick<PolicyTerms, "reviewCostMinorPerHour" | "lostMargin">;
};

export const NOTHING_BOOKED: LedgerLine = {
  attemptedMinor: 0,
  preventedMinor: 0,
  missedMinor: 0,
  recoveredMinor: 0,
  falsePositiveMinor: 0,
  lostMarginMinor: 0,
  reviewCostMinor: 0,
};

const SECONDS_PER_HOUR = 3600n;

/** Held or refused money has not left; recalled money had, and comes back as a recovery. */
function isStopped(state: PaymentState): boolean {
  return state === "held" || state === "refused";
}

/** Handling time × hourly rate in minor units, rounded half-even. @throws RangeError for part seconds */
export function reviewCostMinor(handlingSeconds: number, costMinorPerHour: number): number {
  return Number(divideHalfEven(BigInt(handlingSeconds) * BigInt(costMinorPerHour), SECONDS_PER_HOUR));
}

/**
 * What one finding books. A fraudulent payment is attempted fraud, prevented where the money was still held or
 * refused and gross loss otherwise; a legitimate one that was held or refused is a false positive; a payment that
 * the customer made and disputes costs the review alone. All figures in minor units of the base currency.
 */
export function ledgerLine(finding: Finding): LedgerLine {
  const { terms } = finding;
  const line = {
    ...NOTHING_BOOKED,
    reviewCostMinor: reviewCostMinor(finding.handlingSeconds, terms.reviewCostMinorPerHour),
  };
  const amount = finding.amountBaseMinor ?? 0;
  const stopped = isStopped(finding.paymentState);
  switch (finding.verdict) {
    case "fraudulent":
      return {
        ...line,
        attemptedMinor: amount,
        preventedMinor: stopped ? amount : 0,
        missedMinor: !stopped && finding.wasPassed ? amount : 0,
      };
    case "legitimate":
      if (!stopped) return line;
      return {
        ...line,
        falsePositiveMinor: amount,
        lostMarginMinor: shareOfAmount(amount, terms.lostMargin),
      };
    case "customer_misuse":
      return line;
  }
}

/** The line that brings another one back to nothing, figure by figure. */
export function reversed(line: LedgerLine): LedgerLine {
  return {
    attemptedMinor: 0 - line.attemptedMinor,
    preventedMinor: 0 - line.preventedMinor,
    missedMinor: 0 - line.missedMinor,
    recoveredMinor: 0 - line.recoveredMinor,
    falsePositiveMinor: 0 - line.falsePositiveMinor,
    lostMarginMinor: 0 - line.lostMarginMinor,
    reviewCostMinor: 0 - line.reviewCostMinor,
  };
}

export const isNothing = (line: LedgerLine): boolean =>
  Object.keys(NOTHING_BOOKED).every((figure) => line[figure as keyof LedgerLine] === 0);
