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
import { lockScorerInUse, saveScorer } from "../learning/held-scorer";
import { markLabel } from "../learning/mark-label";
import { labelsInForce } from "../learning/place";
import { type Replacement, replaceLabels } from "../learning/replace";
import { reverseBooking } from "../losses/book";
import { settleRecoveries } from "../losses/recoveries";
import { applyOutcomesAgain } from "../outcomes/apply-again";
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
        const label = inForce.get(standing.transaction.id);
        // Without one, the verdict gave none, or the scorer has been made to forget it while the payment kept it.
        if (label ? label.decisionId !== standing.decision.id : labelOf(standing.decision.verdict) === null)
          continue;
        if (label) replacements.push(undoOf(standing, person, label.place));
        await markLabel(tx, standing.transaction, null, now);
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
