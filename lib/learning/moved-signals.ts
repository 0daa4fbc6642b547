import { CATALOGUE, OFFSETS } from "../signals/catalogue";
import { coordinatesOf } from "../signals/signal";
import type { MovedSignal } from "./drift-schema";

const MOST_NAMED = 5;
/** A shift of fewer standard errors than this is what chance does to one of some dozens of coordinates. */
const STANDARD_ERRORS = 3.5;

type Moments = { mean: Float64Array; variance: Float64Array; count: number };

/**
 * The signals whose readings have moved most, at most five. A signal's shift is that of its most shifted coordinate:
 * difference of the means over the root of the mean variance, the standardised difference of Cohen (1969).
 * @param recent vectors since the change; @param before vectors that they are compared with
 */
export function movedSignals(
  recent: readonly Float64Array[],
  before: readonly Float64Array[],
): MovedSignal[] {
  if (recent.length < 2 || before.length < 2) return [];
  const [now, then] = [momentsOf(recent), momentsOf(before)];
  const least = STANDARD_ERRORS * Math.sqrt(1 / now.count + 1 / then.count);
  return CATALOGUE.map((signal, s) => {
    const from = OFFSETS[s] as number;
    const shifts = Array.from({ length: coordinatesOf(signal) }, (_, i) => shiftOf(from + i, now, then));
    const most = shifts.reduce((a, b) => (Math.abs(b.shift) > Math.abs(a.shift) ? b : a));
    return { key: signal.key, name: signal.name, ...most };
  })
    .filter(({ shift }) => Math.abs(shift) > least)
    .sort((a, b) => Math.abs(b.shift) - Math.abs(a.shift))
    .slice(0, MOST_NAMED);
}

function shiftOf(coordinate: number, now: Moments, then: Moments) {
  const meanRecent = now.mean[coordinate] ?? 0;
  const meanBefore = then.mean[coordinate] ?? 0;
  const spread = Math.sqrt(((now.variance[coordinate] ?? 0) + (then.variance[coordinate] ?? 0)) / 2);
  return { shift: spread > 0 ? (meanRecent - meanBefore) / spread : 0, meanBefore, meanRecent };
}

function momentsOf(vectors: readonly Float64Array[]): Moments {
  const length = vectors.reduce((least, vector) => Math.min(least, vector.length), Number.POSITIVE_INFINITY);
  const mean = new Float64Array(length);
  const variance = new Float64Array(length);
  vectors.forEach((vector, n) => {
    for (let i = 0; i < length; i++) {
      const value = vector[i] as number;
      const off = value - (mean[i] as number);
      mean[i] = (mean[i] as number) + off / (n + 1);
      variance[i] = (variance[i] as number) + off * (value - (mean[i] as number));
    }
  });
  return { mean, variance: variance.map((sum) => sum / (vectors.length - 1)), count: vectors.length };
}
