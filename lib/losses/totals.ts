import { wilsonInterval } from "../quality/wilson";
import { divideHalfEven } from "./rounding";
import type { LedgerLine } from "./rules";

/** What the database adds up for one week; money in minor units of the base currency. */
export type WeekSums = Record<keyof LedgerLine, bigint> & {
  /** Value of the payments that went through: neither held nor refused. */
  settledMinor: bigint;
  payments: number;
  /** Payments of the week whose currency has no rate: they are in no figure of money. */
  unpriced: number;
  /** Cases with a standing verdict. */
  fraudulent: number;
  legitimate: number;
  customerMisuse: number;
  /** Alerts with a standing verdict, samples and siblings left out, and the fraudulent among them. */
  alertsDecided: number;
  alertsFraudulent: number;
};

/** A share with its 95 % interval, in parts per million. */
type ShareOf = { ppm: number; lowPpm: number; highPpm: number; count: number; of: number };

/** Figures that follow from the sums; null means "not defined", never 0. Rates in parts per million: 100 ppm = 1 bp. */
export type WeekTotals = WeekSums & {
  /** Attempted − prevented, recovered or not. */
  grossMinor: bigint;
  /** Gross − recovered. */
  netMinor: bigint;
  /** Net + lost margin + review cost. */
  totalCostMinor: bigint;
  /** Prevented ÷ attempted, by value. */
  valueDetectionPpm: number | null;
  /** Gross, net and total cost ÷ settled value. */
  grossPpm: number | null;
  netPpm: number | null;
  totalCostPpm: number | null;
  /** Fraudulent among the alerts decided. */
  precision: ShareOf | null;
  /** Review cost ÷ cases decided. */
  costPerCaseMinor: bigint | null;
};

/** Ratio of two amounts or counts in parts per million by integer arithmetic, rounded half-even; null over nothing. */
export function partsPerMillion(part: bigint | number, whole: bigint | number): number | null {
  return whole > 0 ? Number(divideHalfEven(BigInt(part) * 1_000_000n, BigInt(whole))) : null;
}

/** The week's figures from its sums. */
export function weekTotals(sums: WeekSums): WeekTotals {
  const grossMinor = sums.attemptedMinor - sums.preventedMinor;
  const netMinor = grossMinor - sums.recoveredMinor;
  const totalCostMinor = netMinor + sums.lostMarginMinor + sums.reviewCostMinor;
  const decided = sums.fraudulent + sums.legitimate + sums.customerMisuse;
  return {
    ...sums,
    grossMinor,
    netMinor,
    totalCostMinor,
    valueDetectionPpm: partsPerMillion(sums.preventedMinor, sums.attemptedMinor),
    grossPpm: partsPerMillion(grossMinor, sums.settledMinor),
    netPpm: partsPerMillion(netMinor, sums.settledMinor),
    totalCostPpm: partsPerMillion(totalCostMinor, sums.settledMinor),
    precision: shareOf(sums.alertsFraudulent, sums.alertsDecided),
    costPerCaseMinor: decided > 0 ? divideHalfEven(sums.reviewCostMinor, BigInt(decided)) : null,
  };
}

function shareOf(count: number, of: number): ShareOf | null {
  const ppm = partsPerMillion(count, of);
  if (ppm === null) return null;
  const { low, high } = wilsonInterval(count, of);
  return { ppm, lowPpm: Math.round(low * 1e6), highPpm: Math.round(high * 1e6), count, of };
}
