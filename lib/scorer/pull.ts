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
 * It lies between target and target + y·strength; a Newton step that leaves the bracket is replaced by halving it.
 * Source: the proximal (implicit) step for the logistic loss. The same stopping rule holds, with max |f''|/2 halved.
 */
export function posteriorLogit(target: number, strength: number, label: number): number {
  const start = label * target;
  let low = start;
  let high = start + strength;
  let w = start;
  for (let round = 0; round < 100 && low < high; round++) {
    const p = logistic(-w);
    const residual = w - strength * p - start;
    if (residual < 0) low = w;
    else high = w;
    const next = w - residual / (1 + strength * p * (1 - p));
    const inside = next >= low && next <= high;
    const settled = inside && (HALF_CURVATURE / 2) * strength * residual * residual <= TOLERANCE;
    w = inside ? next : low + (high - low) / 2;
    if (settled) break;
  }
  return label * w;
}
