import { averagePrecision } from "../quality/average-precision";
import { averagePrecisionIntervalInSteps } from "../quality/bootstrap-precision";
import { brier } from "../quality/brier";
import { calibrationBins } from "../quality/calibration-bins";
import { precisionAtTop } from "../quality/precision-at-top";
import { rocArea } from "../quality/roc-area";
import { spiegelhalter } from "../quality/spiegelhalter";
import type { Estimate, ScorerFigures } from "./learning-schema";

const BINS = 10;
/** A bin of fewer says nothing. */
const FEWEST_IN_BIN = 10;

/** Probabilities of fraud as they were predicted, the labels that hold (±1), and the day of each. */
export type Judged = { probabilities: Float64Array; labels: Int8Array; days: Int32Array };

export type Figures = Pick<
  ScorerFigures,
  "brier" | "auc" | "averagePrecision" | "precisionAtCapacity" | "spiegelhalterZ" | "calibration"
>;

/**
 * How good the predictions were, each figure with n and a 95 % interval, or null where it is not defined.
 * It pauses between figures and within the long ones.
 * @param capacityPerDay how many payments of a day count as its highest
 */
export function* figuresInSteps(judged: Judged, capacityPerDay: number): Generator<void, Figures> {
  const { probabilities: p, labels, days } = judged;
  const n = labels.length;
  const positives = labels.reduce((sum, label) => sum + (label === 1 ? 1 : 0), 0);
  const counts = { n, positives };
  const squared = brier(p, labels);
  yield;
  const area = rocArea(p, labels);
  yield;
  const precision = averagePrecision(p, labels);
  const drawn = yield* averagePrecisionIntervalInSteps(p, labels);
  const top = precisionAtTop(p, labels, days, capacityPerDay);
  yield;
  const calibration = n === 0 ? [] : calibrationBins(p, labels, binsFor(n));
  yield;
  return {
    brier: squared && estimate(squared.value, squared, counts, "normal, over the payments"),
    auc: area && estimate(area.area, area, counts, methodOfArea(area)),
    averagePrecision:
      precision === null || drawn === null
        ? null
        : estimate(precision, drawn, counts, `bootstrap, ${drawn.draws} draws, seed ${drawn.seed}`),
    precisionAtCapacity: top && estimate(top.value, top, top, "Wilson"),
    spiegelhalterZ: spiegelhalter(p, labels),
    calibration: calibration.map(({ positives: _, ...bin }) => bin),
  };
}

const binsFor = (n: number) => Math.max(1, Math.min(BINS, Math.floor(n / FEWEST_IN_BIN)));

const methodOfArea = ({ standardError }: { standardError: number }) =>
  standardError > 0 ? "DeLong" : "Clopper and Pearson, over independent pairs";

function estimate(
  value: number,
  { low, high }: { low: number; high: number },
  { n, positives }: { n: number; positives: number },
  method: string,
): Estimate {
  return { value, n, positives, low, high, method };
}
