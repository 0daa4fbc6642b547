import { Z_95 } from "./normal";

export type MeanEstimate = { value: number; standardError: number; low: number; high: number };

/**
 * A mean with its standard error and the 95 % interval of the central limit theorem, never below 0: for losses.
 * @returns null with fewer than two values
 */
export function meanWithInterval(losses: Float64Array): MeanEstimate | null {
  const n = losses.length;
  if (n < 2) return null;
  const value = losses.reduce((sum, one) => sum + one, 0) / n;
  const squares = losses.reduce((sum, one) => sum + (one - value) ** 2, 0);
  const standardError = Math.sqrt(squares / (n - 1) / n);
  return {
    value,
    standardError,
    low: Math.max(0, value - Z_95 * standardError),
    high: value + Z_95 * standardError,
  };
}
