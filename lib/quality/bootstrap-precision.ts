import { atOnce } from "../steps";
import { poissonCount, seededUnit } from "./seeded";
import { precisionOverGroups, type TieGroups, tieGroupsOf } from "./tie-groups";

export type BootstrapInterval = { low: number; high: number; draws: number; seed: number };

/** More groups than this are joined with their neighbours, which bounds the cost whatever the number of payments. */
const MOST_GROUPS = 3_000;
const DRAWS = 500;
/** A few milliseconds of work. */
const DRAWS_BETWEEN_PAUSES = 10;

/**
 * 95 % interval of average precision by the percentile bootstrap (Efron 1979) in its Poisson form, in which every
 * payment is drawn a Poisson(1) number of times, so that a group of equal scores is drawn at once. The same scores and
 * seed give the same interval. Cost: at most 500 draws of 3,000 groups; joined groups are the payments next to one another in rank,
 * and what the joining itself changes is taken out of both ends.
 * @param labels 1 fraudulent, -1 legitimate
 * @returns null with fewer than two frauds or no legitimate payment
 * @throws RangeError as `averagePrecision`
 */
export function averagePrecisionInterval(
  scores: Float64Array,
  labels: Int8Array,
  seed = 1,
): BootstrapInterval | null {
  return atOnce(averagePrecisionIntervalInSteps(scores, labels, seed));
}

/** As `averagePrecisionInterval`, pausing every few milliseconds, so that others can have their turn. */
export function* averagePrecisionIntervalInSteps(
  scores: Float64Array,
  labels: Int8Array,
  seed = 1,
): Generator<void, BootstrapInterval | null> {
  const exact = tieGroupsOf(scores, labels);
  const value = precisionOverGroups(exact);
  const frauds = exact.frauds.reduce((sum, count) => sum + count, 0);
  if (value === null || frauds < 2 || frauds === scores.length) return null;
  const groups = joined(exact, scores.length);
  const shift = value - (precisionOverGroups(groups) as number);
  const unit = seededUnit(seed);
  const drawn: TieGroups = {
    frauds: new Float64Array(groups.frauds.length),
    legitimate: new Float64Array(groups.frauds.length),
  };
  const values = new Float64Array(DRAWS);
  for (let draw = 0; draw < DRAWS; ) {
    for (let i = 0; i < groups.frauds.length; i++) {
      drawn.frauds[i] = poissonCount(groups.frauds[i] as number, unit);
      drawn.legitimate[i] = poissonCount(groups.legitimate[i] as number, unit);
    }
    const precision = precisionOverGroups(drawn);
    // A draw without a fraud has no precision and is made again.
    if (precision === null) continue;
    values[draw] = precision;
    draw += 1;
    if (draw % DRAWS_BETWEEN_PAUSES === 0) yield;
  }
  values.sort();
  const at = (share: number) => Math.min(1, Math.max(0, quantile(values, share) + shift));
  return { low: at(0.025), high: at(0.975), draws: DRAWS, seed };
}

function joined(groups: TieGroups, payments: number): TieGroups {
  if (groups.frauds.length <= MOST_GROUPS) return groups;
  const size = payments / MOST_GROUPS;
  const frauds: number[] = [];
  const legitimate: number[] = [];
  let seen = 0;
  let block = -1;
  for (let i = 0; i < groups.frauds.length; i++) {
    if (Math.floor(seen / size) > block) {
      block = Math.floor(seen / size);
      frauds.push(0);
      legitimate.push(0);
    }
    const last = frauds.length - 1;
    frauds[last] = (frauds[last] as number) + (groups.frauds[i] as number);
    legitimate[last] = (legitimate[last] as number) + (groups.legitimate[i] as number);
    seen += (groups.frauds[i] as number) + (groups.legitimate[i] as number);
  }
  return { frauds: Float64Array.from(frauds), legitimate: Float64Array.from(legitimate) };
}

/** Linear between the order statistics (definition 7 of Hyndman and Fan, The American Statistician 50, 1996). */
function quantile(sorted: Float64Array, share: number): number {
  const at = share * (sorted.length - 1);
  const below = Math.floor(at);
  const low = sorted[below] as number;
  const high = sorted[Math.min(sorted.length - 1, below + 1)] as number;
  return low + (at - below) * (high - low);
}
