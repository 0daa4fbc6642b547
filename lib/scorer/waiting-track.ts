import { HALF_CURVATURE, pulledLogit } from "./pull";
import type { Move, PartReading } from "./types";

/** A warm-started root is within this of the exact one, in nats; see `pulledLogit` for the bound. */
const WARM_TOLERANCE = 1e-14;

/** z0, s and log odds of one part for every slot. */
export class WaitingTrack {
  z0: Float64Array = new Float64Array(0);
  leverage: Float64Array = new Float64Array(0);
  logit: Float64Array = new Float64Array(0);
  /** tanh(logit/2) as of the last root: Newton's first round then costs no tanh. */
  private tanhHalf: Float64Array = new Float64Array(0);

  grow(capacity: number): void {
    this.z0 = grown(this.z0, capacity);
    this.leverage = grown(this.leverage, capacity);
    this.logit = grown(this.logit, capacity);
    this.tanhHalf = grown(this.tanhHalf, capacity);
  }

  set(slot: number, z0: number, leverage: number, logit: number): void {
    this.z0[slot] = z0;
    this.leverage[slot] = leverage;
    this.logit[slot] = logit;
    this.tanhHalf[slot] = Math.tanh(logit / 2);
  }

  /** v = x·u, z0 += shift·v + x·drift, s -= shrink·v² for slots [from, to), in O(d) each. */
  advance(vectors: Float64Array, move: Move, from: number, to: number): void {
    const { z0, leverage } = this;
    const { shift, shrink, u, drift } = move;
    const products = productsWith(u, vectors, from, to);
    for (let slot = from; slot < to; slot++) {
      const v = products[slot - from] as number;
      z0[slot] = (z0[slot] as number) + shift * v;
      leverage[slot] = Math.max(0, (leverage[slot] as number) - shrink * (v * v));
    }
    if (drift === null) return;
    const drifts = productsWith(drift, vectors, from, to);
    for (let slot = from; slot < to; slot++)
      z0[slot] = (z0[slot] as number) + (drifts[slot - from] as number);
  }

  /** Log odds of slots [from, to) from their z0 and s. */
  findRoots(part: PartReading, offset: number, from: number, to: number): void {
    for (let slot = from; slot < to; slot++) {
      const target = offset + (this.z0[slot] as number);
      const strength = part.outcomeWeight * (this.leverage[slot] as number);
      if (strength === 0) this.logit[slot] = target;
      else this.findRoot(slot, target, strength);
    }
  }

  private findRoot(slot: number, target: number, strength: number): void {
    const goal = Math.abs(target);
    const low = Math.max(goal / (1 + strength / 2), goal - strength);
    const sign = target < 0 ? -1 : 1;
    let w = sign * (this.logit[slot] as number);
    let t = sign * (this.tanhHalf[slot] as number);
    w -= (w + strength * t - goal) / (1 + (strength / 2) * (1 - t * t));
    for (let round = 0; round < 12; round++) {
      if (!(w >= low)) w = low;
      t = Math.tanh(w / 2);
      const residual = w + strength * t - goal;
      const slope = (1 - t * t) / 2;
      const change = residual / (1 + strength * slope);
      w -= change;
      if (HALF_CURVATURE * strength * residual * residual <= WARM_TOLERANCE) {
        this.logit[slot] = sign * w;
        this.tanhHalf[slot] = sign * (t - slope * change);
        return;
      }
    }
    const cold = pulledLogit(target, strength);
    this.logit[slot] = cold;
    this.tanhHalf[slot] = Math.tanh(cold / 2);
  }
}

/**
 * x·u for the vectors of slots [from, to). Four go side by side for speed; each sum still runs in index order, so a
 * case's figures do not depend on how the slots were cut into ranges.
 */
function productsWith(u: Float64Array, vectors: Float64Array, from: number, to: number): Float64Array {
  const d = u.length;
  const products = new Float64Array(to - from);
  let slot = from;
  for (; slot + 4 <= to; slot += 4) {
    const a = slot * d;
    const b = a + d;
    const c = b + d;
    const e = c + d;
    let va = 0;
    let vb = 0;
    let vc = 0;
    let ve = 0;
    for (let j = 0; j < d; j++) {
      const uj = u[j] as number;
      va += (vectors[a + j] as number) * uj;
      vb += (vectors[b + j] as number) * uj;
      vc += (vectors[c + j] as number) * uj;
      ve += (vectors[e + j] as number) * uj;
    }
    products[slot - from] = va;
    products[slot + 1 - from] = vb;
    products[slot + 2 - from] = vc;
    products[slot + 3 - from] = ve;
  }
  for (; slot < to; slot++) {
    let v = 0;
    for (let j = 0, at = slot * d; j < d; j++, at++) v += (vectors[at] as number) * (u[j] as number);
    products[slot - from] = v;
  }
  return products;
}

export function grown(values: Float64Array, length: number): Float64Array {
  const larger = new Float64Array(length);
  larger.set(values);
  return larger;
}
