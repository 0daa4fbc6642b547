import "server-only";
import { demandPerson } from "../auth/demand";
import { addNote } from "../cases/add-note";
import { applyLearned, nextFor } from "../cases/after-decision";
import type { Context } from "../context";
import { probabilityOf } from "../decibans";
import { lockScorerInUse, saveScorer } from "../learning/held-scorer";
import { liftMatured } from "../learning/lift-matured";
import { labelsInForce } from "../learning/place";
import { newId } from "../new-id";
import { policyInForce } from "../policy/read";
import { appendTrail } from "../trail/append";
import { completeAnswer, writeOnce } from "../write-once";
import type { DecideInput, DecideView } from "./schema";
import { type Settled, settleCase } from "./settle";
import { lockTargets, type Target } from "./targets";

/**
 * The verdict on a case and on others of the same account, in one transaction: decision, learning step, loss,
 * money and trail stand or fall together. Waiting cases are ranked anew after the commit.
 */
export async function decideCase(ctx: Context, input: DecideInput): Promise<DecideView> {
  const person = demandPerson(ctx, "desk.work");
  const actId = newId();
  const decided: string[] = [];
  const learned: Settled["learned"][] = [];
  let lifted = false;
  const answer = await writeOnce<DecideView>(
    ctx,
    async (tx) => {
      const now = ctx.now();
      decided.length = 0;
      learned.length = 0;
      const policy = await policyInForce(tx, now);
      const targets = await lockTargets(tx, input, person, policy, now);
      if (input.note)
        await addNote(tx, { caseId: input.id, personId: person.personId, body: input.note, now });
      const held = await lockScorerInUse(tx);
      const inForce = await labelsInForce(
        tx,
        targets.map((target) => target.transaction.id),
      );
      lifted = await liftMatured(tx, held, now, inForce);
      const act = {
        actId,
        person,
        policy,
        confidence: input.confidence,
        scoreWasHidden: input.scoreWasHidden,
        now,
      };
      const settled: Settled[] = [];
      for (const target of targets) {
        settled.push(await settleCase(tx, held, act, target, inForce.get(target.transaction.id)));
      }
      lifted ||= settled.some(({ replacedPlace }) => replacedPlace !== null);
      await saveScorer(tx, held, now);
      await appendTrail(
        ctx,
        tx,
        ...targets.map((target, index) => trailEntry(target, settled[index] as Settled, act)),
      );
      decided.push(...targets.map((target) => target.caseRow.id));
      learned.push(...settled.map((one) => one.learned));
      const [main] = settled as [Settled];
      return {
        decisionId: main.decisionId,
        scorerVersion: held.version,
        probabilityBefore: probabilityOf(main.evidence.logit),
        loss: main.learned?.loss ?? null,
        moved: null,
        undoUntil: main.undoUntil.toISOString(),
        next: null,
      };
    },
    { complete: false },
  );
  const steps = learned.flatMap((one) => one?.step ?? []);
  const moved = await applyLearned(ctx, { version: answer.scorerVersion, steps, decided, rebuilt: lifted });
  const complete = { ...answer, moved, next: await nextFor(ctx, person) };
  await completeAnswer(ctx, complete);
  return complete;
}

function trailEntry(target: Target, settled: Settled, act: { actId: string; policy: { version: number } }) {
  const { caseRow, finding, transaction, score } = target;
  return {
    act: "case.decided",
    subjectKind: "decision",
    subjectId: settled.decisionId,
    caseId: caseRow.id,
    facts: {
      actId: act.actId,
      transactionId: transaction.id,
      verdict: finding.verdict,
      typology: finding.typology,
      scoreId: score.id,
      logit: settled.evidence.logit,
      policyVersion: act.policy.version,
      labelSeq: settled.learned?.seq ?? null,
      replacedPlace: settled.replacedPlace,
      loss: settled.learned?.loss ?? null,
    },
  };
}
