import type { Label, Scorer } from "@/lib/scorer";
import { seededNumbers } from "../../scorer/fixture";
import type { StreamPayment } from "./stream-payments";
import { StreamLabels, type StreamVectors } from "./stream-vectors";

/** Days of the stream count from 0: review begins on the fifteenth. */
export const FIRST_REVIEW_DAY = 14;
/** A chargeback comes seven days after the payment: the first on the eighth day. */
export const FIRST_CHARGEBACK_DAY = 7;
/** 2018-06-05, counted from the first of the stream, 2018-05-01: the week that is judged. */
export const TEST_FROM_DAY = 35;
const ACCOUNTS_A_DAY = 100;
const CHARGEBACK_AFTER_DAYS = 7;

type StreamPlan = {
  /** First day on which fraud that nobody reviewed a week ago arrives as a chargeback; null: none ever does. */
  chargebacksFromDay: number | null;
  /** Passed payments of so many days ago, without a label, that are learned as legitimate each day. */
  matured?: Maturing;
};

export type Maturing = {
  afterDays: number;
  /** As many a day as decisions on the day before, or all. */
  perDay: "as decisions" | "all";
  weight: number;
};

export type LivedStream = {
  /** Log odds at arrival by the payment's index in the stream; none before review begins. */
  logits: Float64Array;
  /** What was learned in order. */
  vectors: Float64Array[];
  labels: Label[];
  /** Of labels by reviewers and chargebacks, each predicted again right before it was learned. */
  loss: number;
  /** How many labels those were. */
  known: number;
  /** How many payments were learned as matured, and how many of those are fraudulent in truth. */
  matured: { count: number; wrong: number };
};

/**
 * Lives the stream day by day. Every payment is scored at arrival, before any label of its day; then the hundred
 * accounts with the highest score are reviewed, which labels all their payments of the day; fraud that was not
 * reviewed arrives as a chargeback seven days later. A label is learned on the vector that was scored at arrival.
 */
export function liveStream(stream: StreamVectors, scorer: Scorer, plan: StreamPlan): LivedStream {
  return new Life(stream, scorer, plan).live();
}

class Life {
  private readonly payments: readonly StreamPayment[];
  private readonly known = new StreamLabels();
  private readonly labelled = new Set<number>();
  private readonly arrived = new Map<number, Float64Array>();
  private readonly chance = seededNumbers(7);
  private readonly lived: LivedStream;
  private decidedYesterday = 0;

  constructor(
    private readonly stream: StreamVectors,
    private readonly scorer: Scorer,
    private readonly plan: StreamPlan,
  ) {
    this.payments = stream.payments;
    const logits = new Float64Array(this.payments.length).fill(Number.NaN);
    this.lived = { logits, vectors: [], labels: [], loss: 0, known: 0, matured: { count: 0, wrong: 0 } };
  }

  live(): LivedStream {
    const days = daysOf(this.payments);
    days.forEach((today, day) => {
      const { chargebacksFromDay, matured } = this.plan;
      const weekAgo = days[day - CHARGEBACK_AFTER_DAYS];
      if (weekAgo && chargebacksFromDay !== null && day >= chargebacksFromDay) this.chargeBack(weekAgo);
      const old = matured && days[day - matured.afterDays];
      if (old && day > FIRST_REVIEW_DAY) this.mature(old, matured);
      this.arrive(today, day);
      if (day >= FIRST_REVIEW_DAY) this.review(today);
    });
    return this.lived;
  }

  private arrive({ from, to }: Span, day: number): void {
    const { matured } = this.plan;
    for (let index = from; index < to; index++) {
      const { isFraud } = this.payments[index] as StreamPayment;
      const isScored = day >= FIRST_REVIEW_DAY;
      if (!isScored && !isFraud && !matured) continue;
      const vector = this.stream.of(index, this.known);
      this.arrived.set(index, vector);
      if (isScored) this.lived.logits[index] = this.scorer.score(vector).logit;
    }
  }

  private review(today: Span): void {
    const reviewed = topAccounts(this.payments, this.lived.logits, today);
    for (const index of reviewed) this.decide(index);
    this.decidedYesterday = reviewed.length;
    // Only fraud comes back later, and whatever may mature.
    for (let index = today.from; index < today.to; index++) {
      const isGone = this.labelled.has(index) || (!this.payments[index]?.isFraud && !this.plan.matured);
      if (isGone) this.arrived.delete(index);
    }
  }

  private chargeBack({ from, to }: Span): void {
    for (let index = from; index < to; index++) {
      if (this.payments[index]?.isFraud && !this.labelled.has(index)) this.decide(index);
    }
  }

  private decide(index: number): void {
    const payment = this.payments[index] as StreamPayment;
    this.lived.loss += this.learn(index, payment.isFraud ? 1 : -1, 1);
    this.lived.known += 1;
    this.labelled.add(index);
    this.known.add(payment);
  }

  /** Maturity teaches the scorer only; the signals of known labels count what somebody found. */
  private mature({ from, to }: Span, { perDay, weight }: Maturing): void {
    const waiting = Array.from({ length: to - from }, (_, i) => from + i).filter(
      (index) => !this.labelled.has(index),
    );
    const drawn = waiting.map((index) => ({ index, at: this.chance() })).sort((a, b) => a.at - b.at);
    for (const { index } of perDay === "all" ? drawn : drawn.slice(0, this.decidedYesterday)) {
      this.learn(index, -1, weight);
      this.lived.matured.count += 1;
      if (this.payments[index]?.isFraud) this.lived.matured.wrong += 1;
    }
  }

  private learn(index: number, label: Label, weight: number): number {
    const vector = this.arrived.get(index) as Float64Array;
    this.lived.vectors.push(this.scorer.place(vector).vector);
    this.lived.labels.push(label);
    return this.scorer.learn(vector, label, weight).loss;
  }
}

type Span = { from: number; to: number };

function daysOf(payments: readonly StreamPayment[]): Span[] {
  const days: Span[] = [];
  payments.forEach(({ day }, index) => {
    days[day] ??= { from: index, to: index };
    (days[day] as Span).to = index + 1;
  });
  return days;
}

/** Indices of the day's payments of the accounts with the highest score, best account first. */
function topAccounts(payments: readonly StreamPayment[], logits: Float64Array, { from, to }: Span): number[] {
  const accounts = new Map<string, { best: number; indices: number[] }>();
  for (let index = from; index < to; index++) {
    const { accountId } = payments[index] as StreamPayment;
    const logit = logits[index] as number;
    const account = accounts.get(accountId);
    if (account) {
      account.best = Math.max(account.best, logit);
      account.indices.push(index);
    } else accounts.set(accountId, { best: logit, indices: [index] });
  }
  const ranked = [...accounts.values()].sort((a, b) => b.best - a.best);
  return ranked.slice(0, ACCOUNTS_A_DAY).flatMap(({ indices }) => indices);
}
