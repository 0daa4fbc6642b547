import "server-only";
import type { Executor } from "@/db/client";
import { Breath } from "../breath";
import type { Scorer } from "../scorer";
import { spansOf } from "../signals/what-would-change";
import type { Removal } from "./find-removals";
import { foldedBy, foldLog, foldStart } from "./fold";
import type { Overrides } from "./fold-apart";
import type { HeldScorer } from "./held-scorer";
import type { ScorerEffect } from "./influence-schema";
import type { Payments } from "./payments-looked-at";
import { ScorerDifference } from "./scorer-effect";

/** The scorer in use as the log without some labels makes it: what their removal would leave, bit for bit. */
export async function foldWithout(
  db: Executor,
  held: HeldScorer,
  removals: readonly Removal[],
): Promise<Scorer> {
  const [first] = removals;
  if (!first) return held.scorer;
  const from = await foldStart(db, foldedBy(held), first.place, held.logSeq);
  return (await foldLog(db, from, held.logSeq, overridesOf(removals))).scorer;
}

export const overridesOf = (removals: readonly Removal[]): Overrides =>
  new Map(removals.map(({ place, label }) => [place, label]));

/** What removing some labels would do to the scorer in use; null where there are none. */
export async function effectOfRemoving(
  db: Executor,
  held: HeldScorer,
  removals: readonly Removal[],
  payments: Payments,
): Promise<ScorerEffect | null> {
  if (removals.length === 0) return null;
  return effectOf(held, await foldWithout(db, held, removals), payments);
}

/** How far a scorer lies from the one in use. */
export async function effectOf(held: HeldScorer, scorer: Scorer, payments: Payments): Promise<ScorerEffect> {
  const difference = new ScorerDifference(held.scorer, scorer);
  const breath = new Breath();
  for (const vector of payments.vectors) {
    difference.addPayment(vector);
    await breath.take();
  }
  return difference.effect(spansOf(held.signals));
}
