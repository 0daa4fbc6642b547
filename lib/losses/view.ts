import "server-only";
import { formatAmount } from "../money";
import type { WeekFigures } from "./read";
import type { WeekTotalsView, WeekView } from "./schema";
import type { WeekTotals } from "./totals";

/** The week's figures as the API and the screens show them: amounts as decimal strings, rates in their units. */
export function weekView(figures: WeekFigures, currency: string): WeekView {
  const money = (minor: bigint) => formatAmount(minor, currency);
  const { start, end, maturity, totals, previous, largest, typologies, ...rest } = figures;
  return {
    ...rest,
    from: start.toISOString(),
    until: end.toISOString(),
    currency,
    maturity: { ...maturity, maturesAt: maturity.maturesAt.toISOString() },
    totals: totalsView(totals, currency),
    previous: { week: previous.week, totals: totalsView(previous.totals, currency) },
    change: amountsOf((figure) => money(totals[figure] - previous.totals[figure])),
    largest: largest.map(({ attemptedMinor, preventedMinor, ...one }) => ({
      ...one,
      attempted: money(attemptedMinor),
      prevented: money(preventedMinor),
    })),
    typologies: typologies.map(({ attemptedMinor, preventedMinor, ...one }) => ({
      ...one,
      attempted: money(attemptedMinor),
      prevented: money(preventedMinor),
    })),
  };
}

function totalsView(totals: WeekTotals, currency: string): WeekTotalsView {
  const { payments, unpriced, fraudulent, legitimate, customerMisuse, precision } = totals;
  return {
    ...amountsOf((figure) => formatAmount(totals[figure], currency)),
    settled: formatAmount(totals.settledMinor, currency),
    payments,
    unpriced,
    fraudulent,
    legitimate,
    customerMisuse,
    valueDetection: totals.valueDetectionPpm === null ? null : totals.valueDetectionPpm / 1e6,
    fraudRateBp: basisPoints(totals.grossPpm),
    netRateBp: basisPoints(totals.netPpm),
    totalCostBp: basisPoints(totals.totalCostPpm),
    precision: precision && {
      share: precision.ppm / 1e6,
      low: precision.lowPpm / 1e6,
      high: precision.highPpm / 1e6,
      count: precision.count,
      of: precision.of,
    },
    costPerCase: totals.costPerCaseMinor === null ? null : formatAmount(totals.costPerCaseMinor, currency),
  };
}

type AmountKey = Exclude<Extract<keyof WeekTotals, `${string}Minor`>, "costPerCaseMinor">;

function amountsOf(of: (figure: AmountKey) => string): WeekView["change"] {
  return {
    attempted: of("attemptedMinor"),
    prevented: of("preventedMinor"),
    gross: of("grossMinor"),
    missed: of("missedMinor"),
    recovered: of("recoveredMinor"),
    net: of("netMinor"),
    falsePositive: of("falsePositiveMinor"),
    lostMargin: of("lostMarginMinor"),
    reviewCost: of("reviewCostMinor"),
    totalCost: of("totalCostMinor"),
  };
}

/** 1 basis point is 100 parts per million; a whole number over 100 prints exactly. */
const basisPoints = (ppm: number | null): number | null => (ppm === null ? null : ppm / 100);
