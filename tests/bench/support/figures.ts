/** Quantile by the nearest rank. @param share in (0, 1] */
export function quantile(values: readonly number[], share: number): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.max(0, Math.ceil(share * sorted.length) - 1)] ?? Number.NaN;
}

export const ms = (value: number): string => `${value.toFixed(1)} ms`;
export const percent = (share: number): string => `${(100 * share).toFixed(1)} %`;
