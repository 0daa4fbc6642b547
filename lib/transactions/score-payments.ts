import "server-only";
import { setImmediate } from "node:timers/promises";
import type { Database } from "@/db/client";
import type { ScoringScorer } from "../learning/held-scorer";
import { newId } from "../new-id";
import type { Zone } from "../policy/codes";
import type { PolicyInForce } from "../policy/read";
import { type Instruction, instructionFor, zoneOf } from "../policy/rules";
import { refreshCut } from "../policy/thresholds";
import { CATALOGUE_VERSION } from "../signals/catalogue";
import { readHistory } from "../signals/history";
import { extendSignals } from "../signals/signal-set";
import { type SignalVector, vectorOf } from "../signals/vectors";
import { dayOf, listArrivalDays } from "./arrival-days";
import { baseAmounts } from "./rates";
import type { Payment } from "./read-item";
import { expectedPassed, isDrawn, sampleProbability } from "./sample";

export type ScoredPayment = SignalVector &
  Instruction & {
    id: string;
    payment: Payment;
    amountBaseMinor: number | null;
    /** Log-odds of fraud, in nats. */
    logit: number;
    leverage: number;
    zone: Zone;
    /** Chance it was drawn with; null where it was not drawn. */
    sampleProbability: number | null;
  };

/** A long batch lets others have their turn after so many payments. */
const PAYMENTS_IN_A_ROW = 100;

/**
 * Signals, score, zone and draw of payments that are new, in the order given. History is as of each payment's own
 * time and holds the batch's earlier payments; labels are those known now.
 */
export async function scorePayments(
  db: Database,
  payments: readonly Payment[],
  held: ScoringScorer,
  policy: PolicyInForce,
  sampleSecret: Buffer,
  now: Date,
): Promise<ScoredPayment[]> {
  if (payments.length === 0) return [];
  const [measured, chances] = await Promise.all([
    measure(db, payments, held),
    sampleChances(db, payments, policy),
  ]);
  const thresholds = await refreshCut(
    db,
    policy,
    now,
    held,
    measured.map(({ logit, payment }) => ({ logit, occurredAt: payment.occurredAt })),
  );
  return measured.map((one) => {
    const id = newId();
    const zone = zoneOf(one.logit, thresholds);
    const chance = zone === "pass" ? (chances.get(dayOf(one.payment.occurredAt)) ?? 0) : 0;
    return {
      ...one,
      id,
      zone,
      ...instructionFor(zone, one.payment.channel, policy.terms, now),
      sampleProbability: chance > 0 && isDrawn(sampleSecret, id, chance) ? chance : null,
    };
  });
}

type Measured = SignalVector & {
  payment: Payment;
  amountBaseMinor: number | null;
  logit: number;
  leverage: number;
};

async function measure(db: Database, payments: readonly Payment[], held: ScoringScorer): Promise<Measured[]> {
  const set = held.signals;
  if (set.catalogueVersion !== CATALOGUE_VERSION) {
    throw new Error(`The scorer in use knows catalogue ${set.catalogueVersion}, not ${CATALOGUE_VERSION}`);
  }
  const timed = payments.map((payment) => ({ ...payment, occurredAtMs: payment.occurredAt.getTime() }));
  const [toBase, history] = await Promise.all([baseAmounts(db, payments), readHistory(db, timed)]);
  const traces = timed.map((payment) => ({
    ...payment,
    accountOpenedAtMs: payment.accountOpenedAt?.getTime() ?? null,
    ruleHits: payment.ruleHits?.length ?? null,
    amountBaseMinor: toBase(payment.amountMinor, payment.currency, payment.occurredAt),
  }));
  const inOrderOfTime = traces.map((trace, index) => ({ trace, index }));
  inOrderOfTime.sort((a, b) => a.trace.occurredAtMs - b.trace.occurredAtMs || a.index - b.index);
  const measured = new Array<Measured>(payments.length);
  for (const [turn, { trace, index }] of inOrderOfTime.entries()) {
    if (turn % PAYMENTS_IN_A_ROW === PAYMENTS_IN_A_ROW - 1) await setImmediate();
    const payment = payments[index] as Payment;
    const { amountBaseMinor } = trace;
    const signals = extendSignals(set, vectorOf(trace, history.of(trace)), { ...payment, amountBaseMinor });
    history.add(trace);
    const { logit, leverage } = held.scorer.score(signals.vector);
    measured[index] = { ...signals, payment, amountBaseMinor, logit, leverage };
  }
  return measured;
}

/** Chance of a passed payment to be drawn, by the day it happened on. */
async function sampleChances(
  db: Database,
  payments: readonly Payment[],
  { terms }: PolicyInForce,
): Promise<Map<string, number>> {
  const moments = payments.map(({ occurredAt }) => occurredAt);
  const counted = await listArrivalDays(db, moments);
  const days = new Set(moments.map(dayOf));
  return new Map(
    [...days].map((day) => [
      day,
      sampleProbability(
        terms.sampleShare,
        terms.dailyCapacity,
        expectedPassed(day, counted, terms.dailyCapacity),
      ),
    ]),
  );
}
