import "server-only";
import { and, eq, inArray, sql } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { bytesToVector, vectorToBytes } from "@/db/columns";
import { cases, decisions } from "@/db/schema/cases";
import { signalRefreshes } from "@/db/schema/scorers";
import { UNDECIDED_STATES } from "../cases/codes";
import type { PersonActor } from "../context";
import { conflict } from "../errors";
import { type Evidence, evidenceOf, packEvidence } from "../learning/evidence";
import type { HeldScorer } from "../learning/held-scorer";
import { learnLabel } from "../learning/learn";
import { markLabel } from "../learning/mark-label";
import type { LabelInForce } from "../learning/place";
import { replaceLabels } from "../learning/replace";
import { bookDecision } from "../losses/book";
import { newId } from "../new-id";
import type { PolicyInForce } from "../policy/read";
import type { Step } from "../scorer";
import { extendVector } from "../signals/signal-set";
import { handlingSeconds, labelOf, overrules, undoUntil } from "./rules";
import type { Target } from "./targets";

export type Act = {
  actId: string;
  person: PersonActor;
  policy: PolicyInForce;
  confidence: "sure" | "unsure";
  scoreWasHidden: boolean;
  now: Date;
};

export type Settled = {
  decisionId: string;
  undoUntil: Date;
  evidence: Evidence;
  /** Null where nothing was learned: the verdict is no label, or an outcome has labelled the payment before. */
  learned: { loss: number; step: Step; seq: number } | null;
  /** Place of the log where the verdict stands instead of the label that it overrules, if it does. */
  replacedPlace: number | null;
};

/** One verdict in full: decision, learning step, label, money, and the case closed. All in the caller's transaction. */
export async function settleCase(
  tx: Tx,
  held: HeldScorer,
  act: Act,
  target: Target,
  inForce: LabelInForce | undefined,
): Promise<Settled> {
  const { caseRow, transaction, score, finding } = target;
  const { person, policy, now } = act;
  const vector = extendVector(held.signals, bytesToVector(score.vector), transaction);
  const evidence = evidenceOf(held.scorer, vector);
  const label = labelOf(finding.verdict);
  const learns = label !== null && inForce === undefined;
  const replacedPlace = inForce && overrules(label, inForce) ? inForce.place : null;
  const relabels = learns || replacedPlace !== null;
  const decisionId = newId();
  const holdExpiresAt = transaction.paymentState === "held" ? transaction.holdExpiresAt : null;
  const until = undoUntil(now, policy.terms.undoMinutes, holdExpiresAt);
  const seconds = handlingSeconds(caseRow.claimedAt, now);
  await tx.insert(decisions).values({
    id: decisionId,
    caseId: caseRow.id,
    transactionId: transaction.id,
    kind: "decision",
    personId: person.personId,
    apiKeyId: person.key?.id ?? null,
    ...finding,
    confidence: act.confidence,
    decidedAt: now,
    undoUntil: until,
    scoreId: score.id,
    evidence: vectorToBytes(packEvidence(evidence)),
    scoreWasHidden: act.scoreWasHidden ? 1 : 0,
    scorerVersionBefore: held.version,
    scorerVersionAfter: held.version + (relabels ? 1 : 0),
    policyVersion: policy.version,
    zone: caseRow.zone,
    actId: act.actId,
    handlingSeconds: seconds,
  });
  await closeCase(tx, caseRow.id, now);
  const source = {
    kind: "decision" as const,
    transactionId: transaction.id,
    caseId: caseRow.id,
    decisionId,
    outcomeId: null,
    personId: person.personId,
  };
  const learned = learns ? await learnLabel(tx, held, now, source, vector, label) : null;
  if (replacedPlace !== null)
    await replaceLabels(tx, held, now, [{ ...source, place: replacedPlace, label: label ?? 0 }]);
  if (relabels) {
    await markLabel(tx, transaction, label, now);
    await tx.insert(signalRefreshes).values({ transactionId: transaction.id, createdAt: now });
  }
  await bookDecision(tx, {
    decisionId,
    caseId: caseRow.id,
    transactionId: transaction.id,
    ...finding,
    overrulesOutcome: replacedPlace !== null,
    handlingSeconds: seconds,
    terms: policy.terms,
    bookedAt: now,
  });
  return { decisionId, undoUntil: until, evidence, learned, replacedPlace };
}

async function closeCase(tx: Tx, caseId: string, now: Date): Promise<void> {
  const [result] = await tx
    .update(cases)
    .set({
      state: "decided",
      decidedAt: now,
      claimedBy: null,
      claimedAt: null,
      claimExpiresAt: null,
      waitUntil: null,
      revision: sql`${cases.revision} + 1`,
      changedAt: now,
    })
    .where(and(eq(cases.id, caseId), inArray(cases.state, [...UNDECIDED_STATES])));
  if (result.affectedRows !== 1) throw conflict("Somebody has decided this case already");
}
