import { DimensionError, StepError } from "./errors";
import { mixedLogit, partLogit, readLeverage, readRawEvidence } from "./reading";
import type { Move, PartReading, Placed, Reading, Scorer, Step } from "./types";
import { grown, WaitingTrack } from "./waiting-track";

/** Mark of a slot that holds no case. */
const FREE = -1;

/**
 * Vectors of waiting cases in one array, each with z0, s and log odds, brought forward label by label in O(d) a case.
 * Every slot knows up to which label it is brought forward, so a step may come in chunks, with cases added or
 * removed between them: no case takes a step twice, and one that missed a step is refused (StepError).
 */
export class Waiting {
  private vectors: Float64Array;
  private seen: Float64Array;
  private reading: Reading = { offset: 0, parts: [] };
  private readonly tracks: readonly WaitingTrack[];
  private mixed: Float64Array;
  private readonly free: number[] = [];
  private capacity = 0;
  private used = 0;

  constructor(
    readonly dimension: number,
    capacityHint: number,
    parts: number,
  ) {
    this.vectors = new Float64Array(0);
    this.seen = new Float64Array(0);
    this.mixed = new Float64Array(0);
    this.tracks = Array.from({ length: parts }, () => new WaitingTrack());
    this.growTo(capacityHint);
  }

  /** Number of cases held. */
  get size(): number {
    return this.used - this.free.length;
  }

  /** One past the highest slot ever used: ranges over all cases run from 0 to here. */
  get end(): number {
    return this.used;
  }

  /** Log odds by slot, up to `end`; a live view, valid until the next `add`. A free slot's entry means nothing. */
  get logits(): Float64Array {
    return this.logitArray().subarray(0, this.used);
  }

  holds(slot: number): boolean {
    return slot >= 0 && slot < this.used && this.seen[slot] !== FREE;
  }

  logit(slot: number): number {
    return this.logitArray()[slot] as number;
  }

  /** s, as `score` tells it. */
  leverage(slot: number): number {
    const [only] = this.tracks;
    // A lone part's own, read where it lies: a whole queue is asked for it to be put in order.
    if (only && this.tracks.length === 1) return only.leverage[slot] as number;
    return readLeverage(this.reading, this.placesOf(slot));
  }

  /** z0, as `score` tells it. */
  rawEvidence(slot: number): number {
    return readRawEvidence(this.reading, this.placesOf(slot));
  }

  /** Takes a case in at the scorer's present state; returns its slot. Errors: DimensionError, NotFiniteError. */
  add(x: Float64Array, scorer: Scorer): number {
    const placed = this.placeWith(x, scorer);
    if (this.free.length === 0 && this.used === this.capacity) this.growTo(Math.max(64, 2 * this.capacity));
    const slot = this.free.pop() ?? this.used++;
    this.fill(slot, placed, scorer);
    return slot;
  }

  /** Gives a case another vector. Errors: as `add`. */
  replace(slot: number, x: Float64Array, scorer: Scorer): void {
    this.requireHeld(slot);
    this.fill(slot, this.placeWith(x, scorer), scorer);
  }

  remove(slot: number): void {
    this.requireHeld(slot);
    this.vectors.fill(0, slot * this.dimension, (slot + 1) * this.dimension);
    for (const track of this.tracks) track.set(slot, 0, 0, 0);
    this.seen[slot] = FREE;
    this.free.push(slot);
  }

  /** Brings every case forward by one label, log odds included. Errors: StepError, changing nothing. */
  advance(step: Step): void {
    this.advanceRange(step, 0, this.used);
    this.rootsRange(step.reading, 0, this.used);
  }

  /**
   * The first half of `advance` for slots [from, to): z0 and s. Cases already past the step are left alone.
   * Errors: StepError when the step is not exact or a case in the range missed an earlier one.
   */
  advanceRange(step: Step, from: number, to: number): void {
    const end = Math.min(to, this.used);
    const together = this.checkStep(step, from, end);
    if (together) this.moveRange(step, from, end);
    for (let slot = from; slot < end; slot++) {
      if (this.seen[slot] !== step.index - 1) continue;
      if (!together) this.moveRange(step, slot, slot + 1);
      this.seen[slot] = step.index;
    }
  }

  /** The second half: log odds of slots [from, to), each within 1e-14 nats of the exact root. */
  rootsRange(reading: Reading, from: number, to: number): void {
    const end = Math.min(to, this.used);
    reading.parts.forEach((part, k) => {
      this.tracks[k]?.findRoots(part, reading.offset, from, end);
    });
    this.mixRange(reading, from, end);
  }

  /** Computes every case afresh, O(d²) each: after undo, projection, forgetting or a refit. */
  recompute(scorer: Scorer): void {
    this.recomputeRange(scorer, 0, this.used);
  }

  recomputeRange(scorer: Scorer, from: number, to: number): void {
    for (let slot = from; slot < Math.min(to, this.used); slot++) {
      if (this.seen[slot] === FREE) continue;
      const x = this.vectors.slice(slot * this.dimension, (slot + 1) * this.dimension);
      this.fill(slot, this.placeWith(x, scorer), scorer);
    }
  }

  private checkStep(step: Step, from: number, end: number): boolean {
    const steps = step.parts ?? [step];
    if (!step.exact) throw new StepError(`step ${step.index} is not exact: recompute the waiting cases`);
    if (steps.length !== this.tracks.length || steps.some(({ u }) => u.length !== this.dimension)) {
      throw new DimensionError(`step ${step.index} is of another scorer`);
    }
    let together = true;
    for (let slot = from; slot < end; slot++) {
      const seen = this.seen[slot] as number;
      if (seen === step.index - 1 || seen === FREE) continue;
      together = false;
      if (seen < step.index) {
        throw new StepError(
          `slot ${slot} stands at label ${seen}, the step is label ${step.index}: recompute`,
        );
      }
    }
    return together;
  }

  private moveRange(step: Step, from: number, to: number): void {
    const steps = step.parts ?? [step];
    this.tracks.forEach((track, k) => {
      track.advance(this.vectors, steps[k] as Move, from, to);
    });
  }

  private mixRange(reading: Reading, from: number, to: number): void {
    this.reading = reading;
    if (this.tracks.length === 1) return;
    const shares = reading.parts.map((part) => part.share);
    const logits = shares.map(() => 0);
    for (let slot = from; slot < to; slot++) {
      this.tracks.forEach((track, k) => {
        logits[k] = track.logit[slot] as number;
      });
      this.mixed[slot] = mixedLogit(shares, logits);
    }
  }

  private placeWith(x: Float64Array, scorer: Scorer): Placed {
    if (scorer.dimension !== this.dimension) throw new DimensionError("the scorer is of another dimension");
    const placed = scorer.place(x);
    if (placed.places.length !== 2 * this.tracks.length) {
      throw new DimensionError(`the scorer has ${placed.places.length / 2} parts, not ${this.tracks.length}`);
    }
    return placed;
  }

  private fill(slot: number, { vector, places }: Placed, scorer: Scorer): void {
    const reading = scorer.reading();
    this.vectors.set(vector, slot * this.dimension);
    this.tracks.forEach((track, k) => {
      const z0 = places[2 * k] as number;
      const leverage = places[2 * k + 1] as number;
      track.set(slot, z0, leverage, partLogit(reading.parts[k] as PartReading, reading.offset, z0, leverage));
    });
    this.mixRange(reading, slot, slot + 1);
    this.seen[slot] = scorer.labels;
  }

  private placesOf(slot: number): Float64Array {
    const places = new Float64Array(2 * this.tracks.length);
    this.tracks.forEach((track, k) => {
      places[2 * k] = track.z0[slot] as number;
      places[2 * k + 1] = track.leverage[slot] as number;
    });
    return places;
  }

  private logitArray(): Float64Array {
    return this.tracks.length === 1 ? (this.tracks[0] as WaitingTrack).logit : this.mixed;
  }

  private requireHeld(slot: number): void {
    if (!this.holds(slot)) throw new RangeError(`slot ${slot} holds no case`);
  }

  private growTo(capacity: number): void {
    this.vectors = grown(this.vectors, capacity * this.dimension);
    this.seen = grown(this.seen, capacity).fill(FREE, this.capacity);
    if (this.tracks.length > 1) this.mixed = grown(this.mixed, capacity);
    for (const track of this.tracks) track.grow(capacity);
    this.capacity = capacity;
  }
}

/**
 * Room for waiting cases of a scorer of this dimension; it grows as needed.
 * @param parts how many parts the scorer has (`scorer.reading().parts.length`): 1, or 6 for `aggregate`.
 */
export function createWaiting(dimension: number, capacityHint = 0, parts = 1): Waiting {
  return new Waiting(dimension, capacityHint, parts);
}
