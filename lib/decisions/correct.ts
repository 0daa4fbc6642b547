import "server-only";
import { and, eq, isNull, sql } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { cases, decisions } from "@/db/schema/cases";
import { signalRefreshes } from "@/db/schema/scorers";
import { scores } from "@/db/schema/transactions";
import { demandPerson } from "../auth/demand";
import { applyLearned } from "../cases/after-decision";
import type { Context, PersonActor } from "../context";
import { conflict, ruleBroken } from "../errors";
import { evidenceOf, packEvidence } from "../learning/evidence";
import { type HeldScorer, lockScorerInUse, readScorerInUse, saveScorer } from "../learning/held-scorer";
import { learnLabel } from "../learning/learn";
import { markLabel } from "../learning/mark-label";
import { type LabelInForce, labelsInForce } from "../learning/place";
import { foldAhead, type ReplacedAhead, replaceLabels } from "../learning/replace";
import { bookDecision, reverseBooking } from "../losses/book";
import { newId } from "../new-id";
import { policyInForce } from "../policy/read";
import { fitVector } from "../signals/read-signal-set";
import { appendTrail } from "../trail/append";
import { completeAnswer, writeOnce } from "../write-once";
import { labelOf } from "./rules";
import type { CorrectionInput, RelearnView } from "./schema";
import { lockStanding, type StandingDecision } from "./standing";

/** Replaces a verdict with a reason. The first one stays on record; the label log is re-run with the new one. */
export async function correctDecision(ctx: Context, input: CorrectionInput): Promise<RelearnView> {
  const person = demandPerson(ctx, "case.correct");
  const ahead = await foldAheadOf(ctx, input);
  const answer = await writeOnce<RelearnView>(
    ctx,
    async (tx) => {
      const now = ctx.now();
      const standing = await lockStanding(tx, input.id);
      if (!standing) throw conflict("No decision stands on this case");
      await refuseOwn(tx, standing, person);
      await refuseSame(tx, standing, input);
      const policy = await policyInForce(tx, now);
      const held = await lockScorerInUse(tx);
      const versionBefore = held.version;
      const decisionId = newId();
      await supersede(tx, standing, now);
      await insertCorrection(tx, {
        decisionId,
        standing,
        person,
        input,
        held,
        policyVersion: policy.version,
        now,
      });
      await relabel(tx, { held, standing, person, decisionId, label: labelOf(input.verdict), now, ahead });
      await bookDecision(tx, {
        decisionId,
        caseId: standing.caseRow.id,
        transactionId: standing.transaction.id,
        verdict: input.verdict,
        typology: input.typology,
        handlingSeconds: 0,
        terms: policy.terms,
        bookedAt: now,
      });
      await tx
        .update(decisions)
        .set({ scorerVersionAfter: held.version })
        .where(eq(decisions.id, decisionId));
      await saveScorer(tx, held, now);
      await appendTrail(ctx, tx, {
        act: "decision.corrected",
        subjectKind: "decision",
        subjectId: decisionId,
        caseId: standing.caseRow.id,
        facts: {
          replaces: standing.decision.id,
          from: standing.decision.verdict,
          verdict: input.verdict,
          typology: input.typology,
          versionBefore,
          versionAfter: held.version,
        },
      });
      return { scorerVersion: held.version, moved: null, revision: standing.caseRow.revision + 1 };
    },
    { complete: false },
  );
  const moved = await applyLearned(ctx, {
    version: answer.scorerVersion,
    steps: [],
    decided: [],
    rebuilt: true,
  });
  const complete = { ...answer, moved };
  await completeAnswer(ctx, complete);
  return complete;
}

/** The long part of a correction, done before anything is locked. */
async function foldAheadOf(ctx: Context, input: CorrectionInput): Promise<ReplacedAhead | undefined> {
  const [row] = await ctx.db
    .select({ transactionId: cases.transactionId })
    .from(cases)
    .where(eq(cases.id, input.id));
  if (!row) return undefined;
  const inForce = (await labelsInForce(ctx.db, [row.transactionId])).get(row.transactionId);
  if (!inForce) return undefined;
  const held = await readScorerInUse(ctx.db);
  return foldAhead(ctx.db, held, [{ place: inForce.place, label: labelOf(input.verdict) ?? 0 }]);
}

/** Neither one's own finding that stands, nor a case on which one's own first verdict has been corrected since. */
async function refuseOwn(
  tx: Tx,
  { decision, caseRow }: StandingDecision,
  person: PersonActor,
): Promise<void> {
  const own = await tx
    .select({ id: decisions.id, kind: decisions.kind })
    .from(decisions)
    .where(
      and(
        eq(decisions.caseId, caseRow.id),
        eq(decisions.personId, person.personId),
        isNull(decisions.undoneAt),
      ),
    );
  if (own.some(({ id, kind }) => kind === "decision" || id === decision.id))
    throw ruleBroken("Nobody corrects a case they decided themselves");
}

/** The same verdict once more is one where the scorer has been made to forget the first: it labels again. */
async function refuseSame(
  tx: Tx,
  { decision, transaction }: StandingDecision,
  input: CorrectionInput,
): Promise<void> {
  if (decision.verdict !== input.verdict || decision.typology !== input.typology) return;
  const isForgotten =
    labelOf(input.verdict) !== null && !(await labelsInForce(tx, [transaction.id])).has(transaction.id);
  if (!isForgotten) throw ruleBroken("The verdict is the one that stands already", "verdict");
}

async function supersede(tx: Tx, { decision, caseRow }: StandingDecision, now: Date): Promise<void> {
  await tx.update(decisions).set({ supersededAt: now }).where(eq(decisions.id, decision.id));
  // The first verdict's review cost was spent and stays booked.
  await reverseBooking(tx, decision.id, now, "review_cost");
  await tx
    .update(cases)
    .set({ revision: sql`${cases.revision} + 1`, changedAt: now })
    .where(eq(cases.id, caseRow.id));
}

type Correction = {
  decisionId: string;
  standing: StandingDecision;
  person: PersonActor;
  input: CorrectionInput;
  held: HeldScorer;
  policyVersion: number;
  now: Date;
};

async function insertCorrection(tx: Tx, correction: Correction): Promise<void> {
  const { decisionId, standing, person, input, held, policyVersion, now } = correction;
  const { decision } = standing;
  const evidence = evidenceOf(held.scorer, await vectorOf(tx, held, decision));
  await tx.insert(decisions).values({
    id: decisionId,
    caseId: decision.caseId,
    transactionId: decision.transactionId,
    kind: "correction",
    personId: person.personId,
    apiKeyId: person.key?.id ?? null,
    verdict: input.verdict,
    typology: input.typology,
    confidence: "sure",
    reason: input.reason,
    decidedAt: now,
    undoUntil: now,
    scoreId: decision.scoreId,
    evidence: vectorToBytes(packEvidence(evidence)),
    scorerVersionBefore: held.version,
    scorerVersionAfter: held.version,
    policyVersion,
    zone: decision.zone,
    actId: newId(),
    handlingSeconds: 0,
  });
}

type Relabel = {
  held: HeldScorer;
  standing: StandingDecision;
  person: PersonActor;
  decisionId: string;
  label: 1 | -1 | null;
  now: Date;
  ahead: ReplacedAhead | undefined;
};

/** At the place of the label that holds; where none does, a new label at a place of its own. */
async function relabel(
  tx: Tx,
  { held, standing, person, decisionId, label, now, ahead }: Relabel,
): Promise<void> {
  const { transaction, caseRow, decision } = standing;
  const inForce: LabelInForce | undefined = (await labelsInForce(tx, [transaction.id])).get(transaction.id);
  if ((inForce?.label ?? null) === label) {
    // The payment's own label may be there still where the scorer has been made to forget it.
    if (transaction.label !== label) await markLabel(tx, transaction, label, now);
    return;
  }
  const source = {
    kind: "correction" as const,
    transactionId: transaction.id,
    caseId: caseRow.id,
    decisionId,
    outcomeId: null,
    personId: person.personId,
  };
  if (inForce)
    await replaceLabels(tx, held, now, [{ ...source, place: inForce.place, label: label ?? 0 }], ahead);
  else if (label !== null) await learnLabel(tx, held, now, source, await vectorOf(tx, held, decision), label);
  await markLabel(tx, transaction, label, now);
  await tx.insert(signalRefreshes).values({ transactionId: transaction.id, createdAt: now });
}

async function vectorOf(
  tx: Tx,
  held: HeldScorer,
  { scoreId, transactionId }: { scoreId: number; transactionId: string },
): Promise<Float64Array> {
  const [row] = await tx.select({ vector: scores.vector }).from(scores).where(eq(scores.id, scoreId));
  if (!row) throw new Error(`Score ${scoreId} is not there`);
  return fitVector(tx, held.signals, transactionId, row.vector);
}
