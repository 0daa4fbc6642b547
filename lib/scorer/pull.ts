import { logistic } from "./logistic";

/** Newton stops once its error is provably below this (absolute, nats). */
const TOLERANCE = 1e-16;
/** max |f''| / 2 = strength·max(t(1 - t²))/4 = strength / (6√3), for f below. */
export const HALF_CURVATURE = 1 / (6 * Math.sqrt(3));

/**
 * Root w of f(w) = w + strength·tanh(w/2) - target, strength ≥ 0.
 *
 * This is the prediction of the improper rule: with target = offset + z0 and strength = a·s,
 * w is the log odds, pulled toward even odds by as much as experience is lacking
 * (Jézéquel, Gaillard, Rudi, COLT 2020, arXiv 2003.08109).
 * The root is unique, has the target's sign and lies in [|target| - strength, |target|]. On that side f is
 * concave, so Newton from the left end climbs to it. As f' ≥ 1, a point with residual r is within |r| of the
 * root, and the next Newton point within HALF_CURVATURE·strength·r²: the stopping rule.
 */
export function pulledLogit(target: number, strength: number): number {
  if (strength === 0) return target;
  const goal = Math.abs(target);
  let w = Math.max(goal / (1 + strength / 2), goal - strength);
  for (let round = 0; round < 50; round++) {
    const t = Math.tanh(w / 2);
    const residual = w + strength * t - goal;
    const next = w - residual / (1 + (strength / 2) * (1 - t * t));
    const settled = next === w || HALF_CURVATURE * strength * residual * residual <= TOLERANCE;
    w = next;
    if (settled) break;
  }
  return target < 0 ? -w : w;
}

/**
 * The log odds after the label: root w of w = target + strength·y·sigma(-yw), where strength = weight·s.
 * Source: the proximal (implicit) step for the logistic loss.
 * In v = yw it is the root of g(v) = v - strength·sigma(-v) - y·target, between y·target and y·target + strength.
 * g is convex below 0 and concave above, so Newton from 0, or from the end of the bracket on the root's side of 0,
 * runs to the root without passing it. As g' ≥ 1 and max |g''|/2 = HALF_CURVATURE·strength/2, it stops as above.
 */
export function posteriorLogit(target: number, strength: number, label: number): number {
  const start = label * target;
  let v = start + strength / 2 >= 0 ? Math.max(0, start) : Math.min(0, start + strength);
  for (let round = 0; round < 100; round++) {
    const p = logistic(-v);
    const residual = v - strength * p - start;
    const next = v - residual / (1 + strength * p * (1 - p));
    const settled = next === v || (HALF_CURVATURE / 2) * strength * residual * residual <= TOLERANCE;
    v = next;
    if (settled) break;
  }
  return label * v;
}
