import { probabilityOf } from "../../decibans";
import { valueAtRisk } from "../../policy/rules";
import type { PolicyTerms } from "../../policy/schema";
import { atOnce } from "../../steps";
import { Best } from "./best";
import { sortDescending } from "./sort";

/** Cases in order of arrival, as the ranking sees them. */
export type Rankable = {
  count: number;
  /** Log-odds in nats. */
  logit: (i: number) => number;
  /** s = x·Px of the scorer: how little experience there is with a vector like this. */
  leverage: (i: number) => number;
  amountBaseMinor: (i: number) => number;
  /** End of a hold that stands, in ms; Infinity where nothing is held. */
  holdEndMs: (i: number) => number;
};

export type Ranking = {
  order: Order;
  /** How many at the front are holds about to expire. */
  expiring: number;
  /** Key of every position: larger is better. An expiring hold's key is its amount. */
  keys: Float64Array;
  /** When the next hold starts or stops to count as about to expire, in ms; Infinity if none will. */
  goodUntilMs: number;
};

export type Keys = Omit<Ranking, "order" | "expiring"> & { expiring: readonly number[] };

/**
 * The order of the queue: holds about to expire by amount, then everything else by the policy's order; ties by arrival.
 * - probability: by log-odds;
 * - value at risk: by the expected saving of stopping the payment;
 * - learning value: leverage × p(1 − p), where a verdict teaches the scorer most.
 */
export const rank = (cases: Rankable, terms: PolicyTerms, nowMs: number): Ranking =>
  inOrder(atOnce(keysInSteps(cases, terms, nowMs)));

const CASES_IN_STEP = 8_192;

/** The first half of `rank`, with a pause now and then for those who let others have their turn. */
export function* keysInSteps(cases: Rankable, terms: PolicyTerms, nowMs: number): Generator<void, Keys> {
  const { count } = cases;
  const keys = new Float64Array(count);
  const expiring: number[] = [];
  const windowMs = terms.expiringMinutes * 60_000;
  let goodUntilMs = Number.POSITIVE_INFINITY;
  for (let i = 0; i < count; i++) {
    if (i % CASES_IN_STEP === CASES_IN_STEP - 1) yield;
    keys[i] = orderKey(cases, i, terms);
    const expiresMs = cases.holdEndMs(i);
    if (expiresMs === Number.POSITIVE_INFINITY || expiresMs <= nowMs) continue;
    const startsMs = expiresMs - windowMs;
    if (startsMs <= nowMs) {
      keys[i] = cases.amountBaseMinor(i);
      expiring.push(i);
    }
    goodUntilMs = Math.min(goodUntilMs, startsMs <= nowMs ? expiresMs : startsMs);
  }
  return { keys, expiring, goodUntilMs };
}

/** The second half of `rank`. */
export function inOrder({ keys, expiring, goodUntilMs }: Keys): Ranking {
  return { keys, goodUntilMs, order: new Order(keys, expiring), expiring: expiring.length };
}

/** So many at the front serve whoever takes the next case, and the first page of the list. */
const FRONT = 160;

/**
 * Positions by arrival, best case first, worked out as far as they are asked for: a decision wants the front of ten
 * thousand cases anew, and sorting them all for it would cost more than anything else about it.
 */
export class Order {
  private front: Uint32Array | null = null;
  private whole: Uint32Array | null = null;

  /** @param first positions that come before all others, whatever their keys */
  constructor(
    private readonly keys: Float64Array,
    private readonly first: readonly number[],
  ) {}

  get length(): number {
    return this.keys.length;
  }

  at(index: number): number {
    if (!this.whole && index < FRONT) this.front ??= frontOf(this.keys, this.first, FRONT);
    if (this.front && index < FRONT) return this.front[index] as number;
    return this.all()[index] as number;
  }

  all(): Uint32Array {
    this.whole ??= withFirst(this.first, this.keys);
    return this.whole;
  }
}

function orderKey(cases: Rankable, i: number, terms: PolicyTerms): number {
  const logit = cases.logit(i);
  switch (terms.order) {
    case "probability":
      return logit;
    case "value_at_risk":
      return valueAtRisk(logit, cases.amountBaseMinor(i), terms);
    case "learning_value": {
      const p = probabilityOf(logit);
      return cases.leverage(i) * p * (1 - p);
    }
  }
}

function withFirst(first: readonly number[], keys: Float64Array): Uint32Array {
  const sorted = sortDescending(keys);
  if (first.length === 0) return sorted;
  const inFront = maskOf(first, keys.length);
  const order = new Uint32Array(keys.length);
  let front = 0;
  let behind = first.length;
  for (const i of sorted) {
    if (inFront[i] === 1) order[front++] = i;
    else order[behind++] = i;
  }
  return order;
}

/** The beginning of `withFirst`, by one pass over the keys. */
function frontOf(keys: Float64Array, first: readonly number[], length: number): Uint32Array {
  const inFront = maskOf(first, keys.length);
  const best = new Best(keys, length);
  for (const i of first) best.offer(i);
  const chosen = best.take();
  const rest = new Best(keys, length - chosen.length);
  for (let i = 0; i < keys.length; i++) if (inFront[i] === 0) rest.offer(i);
  return Uint32Array.from([...chosen, ...rest.take()]);
}

function maskOf(positions: readonly number[], length: number): Uint8Array {
  const mask = new Uint8Array(length);
  for (const i of positions) mask[i] = 1;
  return mask;
}

/** Where a case stood when a page of the list ended. */
export type Place = { expiring: boolean; key: number; number: number };

/** Whether a case comes behind a place in the order. */
export function isBehind(item: Place, place: Place): boolean {
  if (item.expiring !== place.expiring) return place.expiring;
  if (item.key !== place.key) return item.key < place.key;
  return item.number > place.number;
}

/** First index of a sequence, in the order, whose place lies behind `place`. */
export function firstBehind(length: number, placeAt: (index: number) => Place, place: Place): number {
  let low = 0;
  let high = length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (isBehind(placeAt(middle), place)) high = middle;
    else low = middle + 1;
  }
  return low;
}
