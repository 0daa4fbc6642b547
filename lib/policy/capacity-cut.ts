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
 * How many days the payments span, by when they happened.
 * @param arrivals at least one, in any order
 * @returns days, at least one hour of them; for evenly spaced payments exactly last − first
 */
export function daysSpanned(arrivals: readonly ScoredArrival[]): number {
  const times = Float64Array.from(arrivals, (arrival) => arrival.occurredAt.getTime()).sort();
  const left = Math.floor(times.length * STRAGGLER_SHARE);
  const kept = times.subarray(left, times.length - left);
  let spanMs = 0;
  for (let i = 1; i < kept.length; i++) {
    spanMs += Math.min((kept[i] as number) - (kept[i - 1] as number), LONGEST_PAUSE_MS);
  }
  if (kept.length > 1) spanMs *= (times.length - 1) / (kept.length - 1);
  return Math.max(spanMs, SHORTEST_SPAN_MS) / DAY_MS;
}

/**
 * The review line that would have yielded the wished number of cases a day: between the last score counted in and
 * the first left out. Equal scores stay together, on the side that gives fewer cases; where there are fewer
 * payments than wished cases, all lie on or above the line.
 * @param arrivals at least one, in any order
 * @returns log-odds in nats
 */
export function capacityCut(arrivals: readonly ScoredArrival[], casesPerDay: number): number {
  const logits = Float64Array.from(arrivals, (arrival) => arrival.logit).sort();
  const wished = Math.round(casesPerDay * daysSpanned(arrivals));
  if (wished >= logits.length) return (logits[0] as number) - MARGIN_NATS;
  const firstOut = logits[logits.length - 1 - wished] as number;
  const lastIn = logits.find((logit) => logit > firstOut);
  return lastIn === undefined ? firstOut + MARGIN_NATS : (firstOut + lastIn) / 2;
}
