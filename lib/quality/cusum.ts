export type Cusum = { upper: number; lower: number };

export const CUSUM_START: Cusum = { upper: 0, lower: 0 };

/**
 * One step of the two-sided cumulative sum of Page (Biometrika 41, 1954): upper = max(0, upper + rise), lower =
 * max(0, lower + fall). For a mean m with slack k, rise = x − m − k and fall = m − k − x; for a likelihood ratio,
 * the logarithm of it against the alternative of either side. A sum above the line is a signal.
 */
export function stepCusum(sums: Cusum, rise: number, fall: number): Cusum {
  return { upper: Math.max(0, sums.upper + rise), lower: Math.max(0, sums.lower + fall) };
}
