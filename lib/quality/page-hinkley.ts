/** `sum`: of the deviations from the running mean, beyond the tolerance. `least`: the lowest it has been. */
export type PageHinkley = { n: number; mean: number; sum: number; least: number };

export const PAGE_HINKLEY_START: PageHinkley = { n: 0, mean: 0, sum: 0, least: 0 };

/**
 * One step of the Page–Hinkley test for a rising mean that is not known beforehand: m_t = Σ(x_i − mean_i − tolerance),
 * and a signal once m_t lies a line above its lowest so far. Page, Biometrika 41 (1954); Hinkley, Biometrika 58
 * (1971); for streams: Gama, Medas, Castillo and Rodrigues, SBIA 2004.
 */
export function stepPageHinkley(state: PageHinkley, x: number, tolerance: number): PageHinkley {
  const n = state.n + 1;
  const mean = state.mean + (x - state.mean) / n;
  const sum = state.sum + x - mean - tolerance;
  return { n, mean, sum, least: Math.min(state.least, sum) };
}

/** What is held against the line. */
export function riseOf({ sum, least }: PageHinkley): number {
  return sum - least;
}
