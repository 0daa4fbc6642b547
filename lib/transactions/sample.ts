import { createHmac } from "node:crypto";

const BITS = 52;

/**
 * Chance with which a passed payment is drawn for review, so that the team also learns about what it passes.
 * @param sampleShare share of the daily capacity to spend on samples
 * @param expectedPassed payments expected to pass in a day
 * @returns in [0, 1]
 */
export function sampleProbability(
  sampleShare: number,
  dailyCapacity: number,
  expectedPassed: number,
): number {
  return Math.min(1, (sampleShare * dailyCapacity) / Math.max(1, expectedPassed));
}

/**
 * Whether a payment is drawn: a pure function of the installation's secret and the payment's identifier, so that the
 * draw can be repeated by an auditor and foretold by nobody else.
 */
export function isDrawn(secret: Buffer, transactionId: string, probability: number): boolean {
  const digest = createHmac("sha256", secret).update(transactionId).digest();
  const uniform = Number(digest.readBigUInt64BE(0) >> BigInt(64 - BITS)) / 2 ** BITS;
  return uniform < probability;
}

/** Days with this much of an alert share would be the dearest; stands in until one whole day has been counted. */
const PASSED_PER_CASE = 20;

/** A day's count of arrivals by when they happened; `day` as YYYY-MM-DD in UTC. */
export type ArrivalDay = { day: string; received: number; passed: number };

/**
 * Payments expected to pass on a day: the mean of the days before it, or what already passed on it where that is
 * more. Without an earlier day, twenty for every case of capacity.
 */
export function expectedPassed(day: string, counted: readonly ArrivalDay[], dailyCapacity: number): number {
  const before = counted.filter((each) => each.day < day);
  const today = counted.find((each) => each.day === day)?.passed ?? 0;
  const usual =
    before.length > 0
      ? before.reduce((sum, { passed }) => sum + passed, 0) / before.length
      : PASSED_PER_CASE * dailyCapacity;
  return Math.max(usual, today);
}
