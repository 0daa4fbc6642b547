export const NOT_DEFINED = "not defined";

/** 0.763636 → "76.4 %"; nothing to divide by is no 0. */
export const percentText = (share: number | null): string =>
  share === null ? NOT_DEFINED : `${(100 * share).toFixed(1)}\u202f%`;

/** In basis points, hundredths shown as far as there are any. */
export const basisPointText = (basisPoints: number | null): string =>
  basisPoints === null ? NOT_DEFINED : String(basisPoints);
