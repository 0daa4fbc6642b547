import "server-only";
import { desc, eq, inArray } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { signalRefreshes } from "@/db/schema/scorers";
import { scores, transactions } from "@/db/schema/transactions";
import type { LabelKind } from "../decisions/codes";
import type { Label } from "../scorer";
import { fitVector } from "../signals/read-signal-set";
import { type HeldScorer, lockScorerInUse, saveScorer } from "./held-scorer";
import { learnLabel } from "./learn";
import { liftMatured } from "./lift-matured";
import { markLabel } from "./mark-label";
import { type LabelInForce, labelsInForce, settledWithoutLabel } from "./place";
import { type Replacement, replaceLabels } from "./replace";

export type OutcomeLabel = { transactionId: string; outcomeId: string; label: Label };

/** Whether the label changed, and what held before. */
export type OutcomeEffect = OutcomeLabel & { changed: boolean; before: LabelInForce | null };

/** A settled finding is stronger than an outcome; a first or second verdict is weaker. */
const STRONGER_THAN_OUTCOME: readonly LabelKind[] = ["adjudication", "correction"];

/**
 * Books the labels that outcomes bring: new ones are learned in order, those that overturn a verdict re-run the log
 * once for all of them. Locks the scorer; the caller has locked the cases before and appends to the trail after.
 */
export async function labelFromOutcomes(
  tx: Tx,
  now: Date,
  items: readonly OutcomeLabel[],
): Promise<OutcomeEffect[]> {
  const ids = [...new Set(items.map((item) => item.transactionId))];
  if (ids.length === 0) return [];
  const held = await lockScorerInUse(tx);
  const inForce = await labelsInForce(tx, ids);
  await liftMatured(tx, held, now, inForce);
  const withoutLabel = await settledWithoutLabel(tx, ids, STRONGER_THAN_OUTCOME);
  const rows = await tx.select().from(transactions).where(inArray(transactions.id, ids));
  const transactionOf = new Map(rows.map((row) => [row.id, row]));
  const replacements: Replacement[] = [];
  const effects: OutcomeEffect[] = [];
  for (const item of items) {
    const before = inForce.get(item.transactionId) ?? null;
    const changed = before
      ? before.label !== item.label && !STRONGER_THAN_OUTCOME.includes(before.kind)
      : !withoutLabel.has(item.transactionId);
    effects.push({ ...item, changed, before });
    if (!changed) continue;
    const place = await bookOne(tx, held, now, item, before, replacements);
    inForce.set(item.transactionId, { place, label: item.label, kind: "outcome", decisionId: null });
    const transaction = transactionOf.get(item.transactionId);
    if (!transaction) throw new Error("An outcome names a transaction that is not there");
    await markLabel(tx, transaction, item.label, now);
    await tx.insert(signalRefreshes).values({ transactionId: item.transactionId, createdAt: now });
  }
  await replaceLabels(tx, held, now, replacements);
  await saveScorer(tx, held, now);
  return effects;
}

async function bookOne(
  tx: Tx,
  held: HeldScorer,
  now: Date,
  item: OutcomeLabel,
  before: LabelInForce | null,
  replacements: Replacement[],
): Promise<number> {
  const { transactionId, outcomeId, label } = item;
  const source = {
    kind: "outcome" as const,
    transactionId,
    outcomeId,
    caseId: null,
    decisionId: null,
    personId: null,
  };
  if (before) {
    replacements.push({ ...source, place: before.place, label });
    return before.place;
  }
  const { seq } = await learnLabel(tx, held, now, source, await latestVector(tx, held, transactionId), label);
  return seq;
}

/** The vector a reviewer would have seen: the case's newest, else the one scored at arrival. */
async function latestVector(tx: Tx, held: HeldScorer, transactionId: string): Promise<Float64Array> {
  const [ofCase] = await tx
    .select({ vector: scores.vector })
    .from(cases)
    .innerJoin(scores, eq(scores.id, cases.scoreId))
    .where(eq(cases.transactionId, transactionId));
  if (ofCase) return fitVector(tx, held.signals, transactionId, ofCase.vector);
  const [latest] = await tx
    .select({ vector: scores.vector })
    .from(scores)
    .where(eq(scores.transactionId, transactionId))
    .orderBy(desc(scores.id))
    .limit(1);
  if (!latest) throw new Error("A transaction without a score cannot be labelled");
  return fitVector(tx, held.signals, transactionId, latest.vector);
}
