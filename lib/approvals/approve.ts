import "server-only";
import { demandPerson } from "../auth/demand";
import { applyLearned } from "../cases/after-decision";
import type { Context } from "../context";
import { forbidden } from "../errors";
import { readScorerInUse } from "../learning/held-scorer";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { carryOut, foldAheadOf } from "./carry-out";
import { approvalOrThrow } from "./read";
import type { ApprovalView, SettleApprovalInput } from "./schema";
import { lockWaiting, settle } from "./waiting";

/** Approves what somebody else proposed and does it in the same transaction. Waiting cases are ranked anew after it. */
export async function approveProposal(ctx: Context, input: SettleApprovalInput): Promise<ApprovalView> {
  const person = demandPerson(ctx, "approvals.settle");
  const wish = await approvalOrThrow(ctx.db, input.id);
  const mayBeDone = wish.state === "waiting" && wish.proposedBy.id !== person.personId;
  const ahead = mayBeDone ? await foldAheadOf(ctx.db, wish.kind, wish.subject) : undefined;
  const approval = await writeOnce(ctx, async (tx) => {
    const { id, kind, subject, proposedBy } = await lockWaiting(tx, input.id);
    if (proposedBy === person.personId)
      throw forbidden("You proposed this; a second person has to approve it");
    if ("personId" in subject && subject.personId === person.personId)
      throw forbidden("These labels are yours; somebody else has to approve their removal");
    await settle(tx, id, "approved", person.personId, ctx.now());
    await carryOut(ctx, tx, kind, subject, ahead);
    await appendTrail(ctx, tx, {
      act: "approval.approved",
      subjectKind: "approval",
      subjectId: id,
      facts: { kind, ...subject, proposedBy },
    });
    return approvalOrThrow(tx, id);
  });
  const { version } = await readScorerInUse(ctx.db);
  await applyLearned(ctx, { version, steps: [], decided: [], rebuilt: true });
  return approval;
}
