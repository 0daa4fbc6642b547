import { bestInHindsight, type Label, logLoss, probabilityOf } from "../scorer";
import type { LivedLabel } from "./drift-rules";
import type { DriftBaseline } from "./drift-schema";

/** Labels a baseline is fitted to: enough, and enough of the rarer kind, that its own error is far smaller than a drift. */
const [FEWEST, MOST, FEWEST_OF_EITHER] = [500, 2_000, 30];
/** Log odds beyond this say no more than this. */
const FARTHEST = 30;
const WEIGHT_BOUND = 50;

/** Log odds of fraud that were told, from the loss and the label that came. */
function toldLogit({ loss, label }: LivedLabel): number {
  const margin = -Math.log(Math.expm1(loss));
  return label * Math.max(-FARTHEST, Math.min(FARTHEST, margin));
}

/**
 * How the labels stand to the log odds told: shift and slope (Cox, Biometrika 45, 1958), by maximum likelihood over the
 * newest labels. Whoever has seen a warning knows that much; from there on only what departs from it is news.
 * Reported outcomes, which are always fraud, keep a scorer's promises above what reviewers find, and caution for want
 * of experience keeps them too even: without a baseline those two facts would be warned of for ever. The slope is
 * never below 1: taken while a scorer is lost, a flat one would excuse it from then on.
 * @param since how many of the labels came after the change that was warned of
 * @returns null with too few labels, or none of either kind
 */
export function fitBaseline(labels: readonly LivedLabel[], since: number): DriftBaseline | null {
  const fitted = newestEnough(labels, since);
  const frauds = fitted.filter(({ label }) => label === 1).length;
  if (fitted.length < FEWEST || frauds === 0 || frauds === fitted.length) return null;
  const told = fitted.map(toldLogit);
  const { weights } = bestInHindsight(
    told.map((logit) => Float64Array.of(1, logit)),
    fitted.map(({ label }) => label as Label),
    WEIGHT_BOUND,
  );
  const [shift = 0, slope = 1] = weights;
  return slope >= 1
    ? { shift, slope, labels: fitted.length }
    : { shift: shiftAlone(told, frauds), slope: 1, labels: fitted.length };
}

/** The shift with which the promised frauds are as many as there were. */
function shiftAlone(told: readonly number[], frauds: number): number {
  let [low, high] = [-FARTHEST, FARTHEST];
  for (let halving = 0; halving < 50; halving++) {
    const shift = (low + high) / 2;
    const promised = told.reduce((sum, logit) => sum + probabilityOf(shift + logit), 0);
    if (promised < frauds) low = shift;
    else high = shift;
  }
  return (low + high) / 2;
}

function newestEnough(labels: readonly LivedLabel[], since: number): readonly LivedLabel[] {
  let [from, frauds] = [labels.length, 0];
  for (; from > 0; from--) {
    const count = labels.length - from;
    const rarer = Math.min(frauds, count - frauds);
    if (count === MOST || (count >= Math.max(FEWEST, since) && rarer >= FEWEST_OF_EITHER)) break;
    if (labels[from - 1]?.label === 1) frauds += 1;
  }
  return labels.slice(from);
}

/** What each label would have cost, had the baseline been applied to what was told. */
export function againstBaseline(labels: readonly LivedLabel[], baseline: DriftBaseline | null): LivedLabel[] {
  if (!baseline) return [...labels];
  const { shift, slope } = baseline;
  return labels.map((one) => ({ ...one, loss: logLoss(shift + slope * toldLogit(one), one.label) }));
}
