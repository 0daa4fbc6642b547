import { divideHalfEven } from "../losses/rounding";
import type { Outcome } from "./read-item";

/** A dispute that ended in the institution's favour, or that the customer gave up, brings its money back. */
const ENDED_WELL: readonly Outcome["stage"][] = ["won", "withdrawn"];

/**
 * What an outcome says of the payment: 1 fraudulent, −1 legitimate, null nothing. Only fraud reasons are labels; a
 * customer who reports a payment without giving a reason family says that it was not theirs. A dispute that ended
 * well moves money and is no proof that the payment was the customer's own.
 */
export function labelOf(outcome: Pick<Outcome, "kind" | "reasonFamily" | "stage">): 1 | -1 | null {
  const { kind, reasonFamily, stage } = outcome;
  switch (kind) {
    case "chargeback":
      return reasonFamily === "fraud" && !ENDED_WELL.includes(stage) ? 1 : null;
    case "customer_report":
      return (reasonFamily ?? "fraud") === "fraud" && !ENDED_WELL.includes(stage) ? 1 : null;
    case "cleared":
      return -1;
    case "recovery":
      return null;
  }
}

/** Whether money came back by this outcome: a recovery, or a dispute about fraud that ended well. */
export function bringsMoneyBack({ kind, reasonFamily, stage }: Outcome): boolean {
  if (kind === "recovery") return true;
  return kind === "chargeback" && (reasonFamily ?? "fraud") === "fraud" && ENDED_WELL.includes(stage);
}

/**
 * Part of a payment in the base currency, in proportion to the payment itself, so that all of it back is exactly what
 * was lost, whatever the rate. Rounded half-even.
 */
export function partInBase(
  partMinor: number,
  payment: { amountMinor: number; amountBaseMinor: number },
): number {
  if (payment.amountMinor === 0) return 0;
  return Number(
    divideHalfEven(BigInt(partMinor) * BigInt(payment.amountBaseMinor), BigInt(payment.amountMinor)),
  );
}

export type Standing = { hasLabel: boolean; caseState: string | null };

/**
 * Whether "cleared" may label a payment legitimate. It is the weakest of all labels: every verdict and every other
 * outcome that stands is stronger, and where a case waits, the person who decides it is about to know better. A
 * lapsed case waits for nobody.
 */
export function mayClear({ hasLabel, caseState }: Standing): boolean {
  return !hasLabel && (caseState === null || caseState === "lapsed");
}
