import { checkProbabilities } from "./labelled-scores";
import { wilsonInterval } from "./wilson";

export type CalibrationBin = {
  /** Least and greatest probability in it. */
  from: number;
  to: number;
  meanPredicted: number;
  /** Share that proved fraudulent, with Wilson's interval at 95 %. */
  observed: number;
  low: number;
  high: number;
  n: number;
  positives: number;
};

/**
 * Reliability curve: the payments in order of their probability, cut into about `count` bins of equal number, equal
 * probabilities never torn apart (so there can be fewer bins). Quantile bins: Hosmer and Lemeshow, Applied Logistic
 * Regression (1989). A bin agrees with its probabilities where [low, high] holds `meanPredicted`.
 * @param labels 1 fraudulent, -1 legitimate
 * @throws RangeError for unequal lengths, labels other than ±1, p outside [0, 1] and a count below 1
 */
export function calibrationBins(p: Float64Array, labels: Int8Array, count: number): CalibrationBin[] {
  checkProbabilities(p, labels);
  if (!(Number.isInteger(count) && count >= 1)) throw new RangeError("There must be at least one bin");
  const order = Uint32Array.from({ length: p.length }, (_, i) => i);
  order.sort((a, b) => (p[a] as number) - (p[b] as number));
  const bins: CalibrationBin[] = [];
  for (let from = 0; from < order.length; ) {
    let to = Math.max(from + 1, Math.ceil(((bins.length + 1) * order.length) / count));
    while (to < order.length && p[order[to] as number] === p[order[to - 1] as number]) to += 1;
    bins.push(binOf(order.subarray(from, to), p, labels));
    from = to;
  }
  return bins;
}

function binOf(rows: Uint32Array, p: Float64Array, labels: Int8Array): CalibrationBin {
  let sum = 0;
  let positives = 0;
  for (const row of rows) {
    sum += p[row] as number;
    if (labels[row] === 1) positives += 1;
  }
  const n = rows.length;
  return {
    from: p[rows[0] as number] as number,
    to: p[rows[n - 1] as number] as number,
    meanPredicted: sum / n,
    observed: positives / n,
    ...wilsonInterval(positives, n),
    n,
    positives,
  };
}
