import { natsToDecibans } from "../decibans";
import type { Scorer } from "../scorer";
import type { SignalSpan } from "../signals/what-would-change";
import type { ScorerEffect } from "./influence-schema";

const SIGNALS_NAMED = 3;

/** How far one scorer lies from another of the same dimension: in its weights, and over some payments in its scores. */
export class ScorerDifference {
  private sum = 0;
  private largest = 0;
  private payments = 0;

  constructor(
    private readonly from: Scorer,
    private readonly to: Scorer,
  ) {}

  /** Takes in the scores of one payment. @throws DimensionError, NotFiniteError */
  addPayment(vector: Float64Array): void {
    const change = natsToDecibans(Math.abs(this.to.score(vector).logit - this.from.score(vector).logit));
    this.sum += change;
    this.largest = Math.max(this.largest, change);
    this.payments += 1;
  }

  /** @param signals whose coordinates are named; what lies outside them counts towards the distance only */
  effect(signals: readonly SignalSpan[]): ScorerEffect {
    const before = this.from.weights();
    const change = this.to.weights().map((weight, i) => weight - (before[i] as number));
    return {
      weightDistance: lengthOf(change),
      meanDecibans: this.payments === 0 ? null : this.sum / this.payments,
      largestDecibans: this.payments === 0 ? null : this.largest,
      signals: signals
        .map(({ key, name, from, to }) => ({ key, name, distance: lengthOf(change.subarray(from, to)) }))
        .filter(({ distance }) => distance > 0)
        .sort((a, b) => b.distance - a.distance)
        .slice(0, SIGNALS_NAMED),
    };
  }
}

export const lengthOf = (vector: Float64Array): number =>
  Math.sqrt(vector.reduce((sum, entry) => sum + entry * entry, 0));
