/**
 * Reference fraud rates of the Annex to Commission Delegated Regulation (EU) 2018/389, in parts per million of value,
 * by the highest amount in euro up to which the exemption of Article 18 may be used.
 */
const REFERENCE_RATES_PPM = {
  card: { 100: 1300, 250: 600, 500: 100 },
  credit_transfer: { 100: 150, 250: 100, 500: 50 },
} as const;

export type ReferenceFamily = keyof typeof REFERENCE_RATES_PPM;
export type ExemptionThreshold = keyof (typeof REFERENCE_RATES_PPM)["card"];

/**
 * Whether a fraud rate is at or below the reference rate (Article 19: value of unauthorised or fraudulent remote
 * payments, recovered or not, over the value of all remote payments of the type; computed once a calendar quarter).
 * Compared as integers: fractions of basis points in floating point would misjudge a rate that is exactly equal.
 * @param fraudMinor gross fraudulent value, recoveries not taken off
 * @returns null where nothing was paid: the rate is then not defined
 */
export function isWithinReference(
  fraudMinor: number,
  totalMinor: number,
  family: ReferenceFamily,
  threshold: ExemptionThreshold,
): boolean | null {
  if (totalMinor <= 0) return null;
  return (
    BigInt(fraudMinor) * 1_000_000n <= BigInt(REFERENCE_RATES_PPM[family][threshold]) * BigInt(totalMinor)
  );
}
