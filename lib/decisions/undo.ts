import "server-only";
import { eq, sql } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases, decisions } from "@/db/schema/cases";
import { signalRefreshes } from "@/db/schema/scorers";
import { demandPerson } from "../auth/demand";
import { applyLearned } from "../cases/after-decision";
import { leaseEnd, unheldState } from "../cases/rules";
import type { Context, PersonActor } from "../context";
import { conflict, ruleBroken } from "../errors";
import { type FindingRow, findingThatHolds } from "../learning/finding";
import { lockScorerInUse, saveScorer } from "../learning/held-scorer";
import { markLabel } from "../learning/mark-label";
import { type LabelInForce, labelsInForce, placeOfDecision, rowsAtPlace } from "../learning/place";
import { type Replacement, replaceLabels } from "../learning/replace";
import { bookOutcome, reverseBooking } from "../losses/book";
import { settleRecoveries } from "../losses/recoveries";
import { applyOutcomesAgain } from "../outcomes/apply-again";
import { policyInForce } from "../policy/read";
import { appendTrail } from "../trail/append";
import { completeAnswer, writeOnce } from "../write-once";
import { labelOf } from "./rules";
import type { RelearnView } from "./schema";
import { findLastDecision, lockAct, type StandingDecision } from "./standing";

/**
 * Takes back one's own last decision, with all that was decided in the same act, within the grace period.
 * The label log is re-run, so that the weights are those of a log without it.
 */
export async function undoDecision(ctx: Context, input: { id: string }): Promise<RelearnView> {
  const person = demandPerson(ctx, "desk.work");
  const restored: string[] = [];
  const answer = await writeOnce<RelearnView>(
    ctx,
    async (tx) => {
      const now = ctx.now();
      const act = await lockOwnLastAct(tx, person, input.id, now);
      restored.splice(0, restored.length, ...act.map(({ caseRow }) => caseRow.id));
      const held = await lockScorerInUse(tx);
      const inForce = await labelsInForce(
        tx,
        act.map(({ transaction }) => transaction.id),
      );
      const replacements: Replacement[] = [];
      for (const standing of act) {
        await takeBack(tx, standing, person, standing.caseRow.id === input.id, now);
        const taken = await labelTakenBack(tx, standing, inForce.get(standing.transaction.id));
        if (!taken) continue;
        const { place, back } = taken;
        if (place !== null)
          replacements.push({ ...undoOf(standing, person, place), label: back?.label ?? 0 });
        await markLabel(tx, standing.transaction, back?.label || null, now);
        if (back?.outcomeId) await bookAgain(tx, standing, { ...back, outcomeId: back.outcomeId }, now);
        await settleRecoveries(tx, recoveriesOf(standing), false, now);
        await tx.insert(signalRefreshes).values({ transactionId: standing.transaction.id, createdAt: now });
      }
      await replaceLabels(tx, held, now, replacements);
      await saveScorer(tx, held, now);
      for (const { transactionId } of replacements) await applyOutcomesAgain(tx, now, transactionId);
      const { version } = await lockScorerInUse(tx);
      await appendTrail(
        ctx,
        tx,
        ...act.map(({ decision, caseRow }) => ({
          act: "decision.undone",
          subjectKind: "decision",
          subjectId: decision.id,
          caseId: caseRow.id,
          facts: { actId: decision.actId, verdict: decision.verdict, scorerVersion: version },
        })),
      );
      const main = act.find(({ caseRow }) => caseRow.id === input.id) as StandingDecision;
      return { scorerVersion: version, moved: null, revision: main.caseRow.revision + 1 };
    },
    { complete: false },
  );
  const moved = await applyLearned(ctx, {
    version: answer.scorerVersion,
    steps: [],
    decided: [],
    restored,
    rebuilt: true,
  });
  const complete = { ...answer, moved };
  await completeAnswer(ctx, complete);
  return complete;
}

async function lockOwnLastAct(
  tx: Tx,
  person: PersonActor,
  caseId: string,
  now: Date,
): Promise<StandingDecision[]> {
  const last = await findLastDecision(tx, person.personId);
  if (!last) throw ruleBroken("You have no decision to take back");
  const act = await lockAct(tx, last);
  if (!act.some(({ caseRow }) => caseRow.id === caseId)) {
    throw ruleBroken("Only your own last decision can be taken back; ask a supervisor for a correction");
  }
  for (const { decision, caseRow } of act) {
    // A copy of this request that waited for the lock finds the decision undone or replaced.
    if (decision.undoneAt || decision.supersededAt || caseRow.state !== "decided") {
      throw conflict(`The decision on case ${caseRow.number} no longer stands`);
    }
    if (decision.undoUntil.getTime() < now.getTime()) {
      throw ruleBroken("The time to take this decision back is over; ask a supervisor for a correction");
    }
  }
  return act;
}

/** The case asked for goes back into the person's hands; others of the act go back to the queue. */
async function takeBack(
  tx: Tx,
  { decision, caseRow }: StandingDecision,
  person: PersonActor,
  intoHand: boolean,
  now: Date,
): Promise<void> {
  await tx.update(decisions).set({ undoneAt: now }).where(eq(decisions.id, decision.id));
  // The claim begins anew, so that the time spent until now is in no later decision's cost: it stays booked.
  await reverseBooking(tx, decision.id, now, "review_cost");
  await tx
    .update(cases)
    .set({
      decidedAt: null,
      ...(intoHand
        ? {
            state: "claimed" as const,
            claimedBy: person.personId,
            claimedAt: now,
            claimExpiresAt: leaseEnd(now),
          }
        : { state: unheldState(caseRow.escalatedAt) }),
      revision: sql`${cases.revision} + 1`,
      changedAt: now,
    })
    .where(eq(cases.id, caseRow.id));
}

/**
 * Where the verdict stands in the log, and what had been found there before it and holds again. Null where it stands
 * nowhere; without a place where the scorer has been made to forget it while the payment kept its label.
 */
async function labelTakenBack(
  tx: Tx,
  { decision, transaction }: StandingDecision,
  inForce: LabelInForce | undefined,
): Promise<{ place: number | null; back: FindingRow | null } | null> {
  if (inForce && inForce.decisionId !== decision.id) return null;
  if (!inForce && labelOf(decision.verdict) !== null) return { place: null, back: null };
  const place = inForce?.place ?? (await placeOfDecision(tx, transaction.id, decision.id));
  if (place === null) return null;
  const rows = await rowsAtPlace(tx, place);
  return { place, back: findingThatHolds(rows.filter(({ decisionId }) => decisionId !== decision.id)) };
}

/** Its line was taken back when the decision overruled it. */
async function bookAgain(
  tx: Tx,
  { transaction }: StandingDecision,
  { label, outcomeId }: { label: FindingRow["label"]; outcomeId: string },
  now: Date,
): Promise<void> {
  const { terms } = await policyInForce(tx, now);
  await bookOutcome(tx, {
    outcomeId,
    transactionId: transaction.id,
    verdict: label === 1 ? "fraudulent" : "legitimate",
    typology: label === 1 ? "other" : null,
    terms,
    bookedAt: now,
  });
}

const recoveriesOf = ({ transaction }: StandingDecision) => ({
  transactionId: transaction.id,
  occurredAt: transaction.occurredAt,
});

function undoOf(
  { decision, caseRow, transaction }: StandingDecision,
  person: PersonActor,
  place: number,
): Replacement {
  return {
    kind: "undo",
    place,
    label: 0,
    transactionId: transaction.id,
    caseId: caseRow.id,
    decisionId: decision.id,
    outcomeId: null,
    personId: person.personId,
  };
}
