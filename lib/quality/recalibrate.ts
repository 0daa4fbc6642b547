import { isotonicFit } from "./isotonic";
import { checkProbabilities } from "./labelled-scores";

/** Probabilities from `from` up to `to` should have been `share`. */
export type RecalibrationStep = { from: number; to: number; share: number; n: number; positives: number };

/**
 * What the probabilities should have been for these labels, if only their order is trusted: isotonic regression of the
 * labels on them, equal probabilities pooled first. Zadrozny and Elkan, KDD 2002; as a reliability curve without bins
 * to choose: Dimitriadis, Gneiting and Jordan, PNAS 118 (2021).
 * @param labels 1 fraudulent, -1 legitimate
 * @returns the steps from the lowest probability up; none for no labels
 * @throws RangeError for unequal lengths, labels other than ±1 and p outside [0, 1]
 */
export function recalibrationSteps(p: Float64Array, labels: Int8Array): RecalibrationStep[] {
  checkProbabilities(p, labels);
  const order = Uint32Array.from({ length: p.length }, (_, i) => i);
  order.sort((a, b) => (p[a] as number) - (p[b] as number));
  const distinct: { p: number; n: number; positives: number }[] = [];
  for (const i of order) {
    const at = p[i] as number;
    let last = distinct.at(-1);
    if (last?.p !== at) {
      last = { p: at, n: 0, positives: 0 };
      distinct.push(last);
    }
    last.n += 1;
    if (labels[i] === 1) last.positives += 1;
  }
  const fit = isotonicFit(
    distinct.map(({ n, positives }) => positives / n),
    distinct.map(({ n }) => n),
  );
  const steps: RecalibrationStep[] = [];
  for (const [i, { p: at, n, positives }] of distinct.entries()) {
    const last = steps.at(-1);
    if (last && last.share === fit[i]) {
      last.to = at;
      last.n += n;
      last.positives += positives;
    } else steps.push({ from: at, to: at, share: fit[i] as number, n, positives });
  }
  return steps;
}
