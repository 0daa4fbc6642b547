import { logLoss, probabilityOf } from "../scorer";
import type { LivedLabel } from "./drift-rules";
import type { DriftBaseline } from "./drift-schema";

/** Labels a baseline is fitted to: enough, and enough of the rarer kind, that its own error is far smaller than a drift. */
const [FEWEST, MOST, FEWEST_OF_EITHER] = [500, 2_000, 30];
/** Log odds beyond this say no more than this. */
const FARTHEST = 30;

/** Log odds of fraud that were told, from the loss and the label that came. */
function toldLogit({ loss, label }: LivedLabel): number {
  const margin = -Math.log(Math.expm1(loss));
  return label * Math.max(-FARTHEST, Math.min(FARTHEST, margin));
}

/**
 * By how much the log odds told would have to be shifted for the labels to be as promised: calibration in the large
 * (Cox, Biometrika 45, 1958), by maximum likelihood over the newest labels. Whoever has seen a warning knows that
 * much; from there on only what departs from it is news. Reported outcomes, which are always fraud, keep a scorer's
 * promises above what reviewers find, and without a baseline that one fact would be warned of for ever. The slope is
 * left alone: a baseline with a slope of its own, taken while a scorer is lost, would excuse it from then on.
 * @param since how many of the labels came after the change that was warned of
 * @returns null with too few labels, or none of either kind
 */
export function fitBaseline(labels: readonly LivedLabel[], since: number): DriftBaseline | null {
  const fitted = newestEnough(labels, since);
  const frauds = fitted.filter(({ label }) => label === 1).length;
  if (fitted.length < FEWEST || frauds === 0 || frauds === fitted.length) return null;
  const told = fitted.map(toldLogit);
  let [low, high] = [-FARTHEST, FARTHEST];
  for (let halving = 0; halving < 50; halving++) {
    const shift = (low + high) / 2;
    const promised = told.reduce((sum, logit) => sum + probabilityOf(shift + logit), 0);
    if (promised < frauds) low = shift;
    else high = shift;
  }
  return { shift: (low + high) / 2, labels: fitted.length };
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

/** What each label would have cost, had what was told been shifted by the baseline. */
export function againstBaseline(labels: readonly LivedLabel[], baseline: DriftBaseline | null): LivedLabel[] {
  if (!baseline) return [...labels];
  return labels.map((one) => ({ ...one, loss: logLoss(baseline.shift + toldLogit(one), one.label) }));
}
