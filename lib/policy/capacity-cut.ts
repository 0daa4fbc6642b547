/** One scored payment: its log-odds in nats, and when it happened. */
export type ScoredArrival = { logit: number; occurredAt: Date };

const DAY_MS = 86_400_000;
/** A burst is measured as if it had taken this long: a minute of payments says little about a day. */
const SHORTEST_SPAN_MS = 3_600_000;
/** A longer pause between two payments counts as this much: the feed was off, or an old file was loaded. */
const LONGEST_PAUSE_MS = DAY_MS / 2;
/** Share of payments left out at each end of time, so that a few late stragglers do not stretch the span. */
const STRAGGLER_SHARE = 0.005;
/** Keeps the cut off the scores themselves: a stored double may come back with its last bit changed. */
const MARGIN_NATS = 1e-9;

/**
 * How many days payments span, by when they happened.
 * @param times epoch milliseconds of at least one payment, or of a random share of them, in any order
 * @returns days, at least one hour of them; for evenly spaced payments exactly last − first
 */
export function daysSpanned(times: Iterable<number>): number {
  const sorted = Float64Array.from(times).sort();
  const left = Math.floor(sorted.length * STRAGGLER_SHARE);
  const kept = sorted.subarray(left, sorted.length - left);
  let spanMs = 0;
  for (let i = 1; i < kept.length; i++) {
    spanMs += Math.min((kept[i] as number) - (kept[i - 1] as number), LONGEST_PAUSE_MS);
  }
  if (kept.length > 1) spanMs *= (sorted.length - 1) / (kept.length - 1);
  return Math.max(spanMs, SHORTEST_SPAN_MS) / DAY_MS;
}

/**
 * The line between the last score counted in and the first left out. Equal scores stay together, on the side that
 * gives fewer cases; where there are no more scores than wished, all lie above the line.
 * @param highest the `wished` + 1 highest scores, or all where there are fewer but at least one; falling, in nats
 */
export function cutBelow(highest: readonly number[], wished: number): number {
  const firstOut = highest[wished];
  if (firstOut === undefined) return (highest.at(-1) as number) - MARGIN_NATS;
  const lastIn = highest.findLast((logit) => logit > firstOut);
  return lastIn === undefined ? firstOut + MARGIN_NATS : (firstOut + lastIn) / 2;
}

/** The review line, in nats, that would have yielded the wished number of cases a day; at least one arrival. */
export function capacityCut(arrivals: readonly ScoredArrival[], casesPerDay: number): number {
  const wished = Math.round(
    casesPerDay * daysSpanned(arrivals.map(({ occurredAt }) => occurredAt.getTime())),
  );
  const falling = arrivals.map(({ logit }) => logit).sort((a, b) => b - a);
  return cutBelow(falling.slice(0, wished + 1), wished);
}
