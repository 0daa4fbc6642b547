import { CUSUM_START, stepCusum } from "../quality/cusum";
import type { DriftKind } from "./codes";

/** A label as the scorer in use lived it: what its prediction cost, in nats. */
export type LivedLabel = { seq: number; at: Date; label: number; loss: number };

export type Crossing = {
  /** Position among the labels watched, and the row of the label log. */
  index: number;
  seq: number;
  at: Date;
  /** Positive: labels cost more than the scores promised. Negative: less. */
  statistic: number;
  line: number;
  /** Position of the first label after which, as far as can be told, things were different. */
  since: number;
};

export type Watched = { crossing: Crossing | null; value: number | null };

/** A scorer that has seen fewer labels than this promises badly, and everybody knows it. */
export const WARM_UP_LABELS = 200;
export const CALIBRATION_WINDOW = 500;
/** So many labels in a row without a crossing are back in band. */
const QUIET_LABELS = 500;
/** The alternative that losses are held against: log odds half as large or half as large again as they were told. */
const TILT = 0.5;
/**
 * Simulated over queues of four kinds (tests/learning/drift-rules.test.ts): either line is crossed by chance less than
 * once in 30,000 labels on average, so both together less than once in 15,000.
 */
export const LINES: Record<DriftKind, number> = { loss: 8, calibration: 4 };
/** Of this many standard deviations is 95 % of what happens in band. */
const BACK_IN_BAND = 1.96;
export const LABELS_PER_FALSE_WARNING = 15_000;

/** What the prediction gave to the label that came and to the one that did not. */
const chancesOf = (loss: number): [came: number, other: number] => [Math.exp(-loss), -Math.expm1(-loss)];

/** Probability of fraud that was told, from the loss and the label that came. */
export function toldProbability({ loss, label }: Pick<LivedLabel, "loss" | "label">): number {
  const [came, other] = chancesOf(loss);
  return label === 1 ? came : other;
}

/** Mean of the loss that the prediction itself promised: the entropy of the two chances, in nats. */
export function promisedLoss(loss: number): number {
  const [came, other] = chancesOf(loss);
  return came * loss - (other > 0 ? other * Math.log(other) : 0);
}

/**
 * Evidence in nats that the log odds told were too large by the factor 1/(1 − tilt), from one loss ℓ: the logarithm of
 * the likelihood ratio of p^(1−tilt) against p, which is tilt·ℓ − ln E e^(tilt·ℓ). To second order it is
 * tilt·(ℓ − entropy) − tilt²/2·V with V = p(1−p)·logit(p)², the variance of the loss that the prediction promised: the
 * martingale residual of the loss, less a slack in its own predicted variance. A single fraud among a thousand sure
 * scores so weighs what it should, where dividing by √V would let it ring alone.
 */
export function lossEvidence(loss: number, tilt: number): number {
  const [came, other] = chancesOf(loss);
  return tilt * loss - Math.log(came ** (1 - tilt) + other ** (1 - tilt));
}

/**
 * Watches the losses by the two-sided cumulative sum of Page (Biometrika 41, 1954) over `lossEvidence`: up for scores
 * that are too sure, down for scores that are too timid. The sum is preferred to the Page–Hinkley test because the
 * promised loss is known from the scores; a running mean of the losses moves with the mix of cases and with learning.
 * @param isQuiet false while an unseen warning stands: then only 500 labels without a crossing make it ready again
 */
export function watchLoss(labels: readonly LivedLabel[], isQuiet: boolean): Watched {
  let sums = CUSUM_START;
  let since = { upper: 0, lower: 0 };
  let quietFor = isQuiet ? QUIET_LABELS : 0;
  for (const [index, { loss, seq, at }] of labels.entries()) {
    sums = stepCusum(sums, lossEvidence(loss, TILT), lossEvidence(loss, -TILT));
    if (sums.upper === 0) since.upper = index + 1;
    if (sums.lower === 0) since.lower = index + 1;
    quietFor += 1;
    const side = sums.upper > LINES.loss ? "upper" : sums.lower > LINES.loss ? "lower" : null;
    if (side === null) continue;
    const statistic = side === "upper" ? sums.upper : -sums.lower;
    if (quietFor > QUIET_LABELS) {
      const crossing = { index, seq, at, statistic, line: LINES.loss, since: since[side] };
      return { crossing, value: statistic };
    }
    sums = CUSUM_START;
    since = { upper: index + 1, lower: index + 1 };
    quietFor = 0;
  }
  return { crossing: null, value: sums.upper >= sums.lower ? sums.upper : -sums.lower };
}

/**
 * Watches Spiegelhalter's z (Statistics in Medicine 5, 1986) over the last 500 labels, at every label. It depends on
 * the chance given to what came alone, as the loss does.
 * @param isQuiet false while an unseen warning stands: then |z| must have come back under 1.96
 */
export function watchCalibration(labels: readonly LivedLabel[], isQuiet: boolean): Watched {
  let ready = isQuiet;
  let value: number | null = null;
  const terms = labels.map(({ loss }) => {
    const [came, other] = chancesOf(loss);
    const slope = other - came;
    return { excess: other * slope, variance: slope * slope * came * other };
  });
  let excess = 0;
  let variance = 0;
  for (const [index, { seq, at }] of labels.entries()) {
    const [added, gone] = [terms[index], terms[index - CALIBRATION_WINDOW]];
    excess += (added?.excess ?? 0) - (gone?.excess ?? 0);
    variance += (added?.variance ?? 0) - (gone?.variance ?? 0);
    if (index < CALIBRATION_WINDOW - 1 || !(variance > 1e-9)) continue;
    value = excess / Math.sqrt(variance);
    if (Math.abs(value) <= BACK_IN_BAND) ready = true;
    if (ready && Math.abs(value) > LINES.calibration) {
      const since = index + 1 - CALIBRATION_WINDOW;
      return { crossing: { index, seq, at, statistic: value, line: LINES.calibration, since }, value };
    }
  }
  return { crossing: null, value };
}

export const WATCHES: Record<DriftKind, typeof watchLoss> = {
  loss: watchLoss,
  calibration: watchCalibration,
};
