import "server-only";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { forbidden } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { approvalOrThrow } from "./read";
import type { ApprovalView, RefuseApprovalInput } from "./schema";
import { lockWaiting, settle } from "./waiting";

/** Turns down what somebody else proposed. Its proposer withdraws it instead. */
export async function refuseProposal(ctx: Context, input: RefuseApprovalInput): Promise<ApprovalView> {
  const person = demandPerson(ctx, "approvals.settle");
  return writeOnce(ctx, async (tx) => {
    const { id, kind, subject, proposedBy } = await lockWaiting(tx, input.id);
    if (proposedBy === person.personId) throw forbidden("You proposed this; you can withdraw it");
    if ("personId" in subject && subject.personId === person.personId)
      throw forbidden("These labels are yours; somebody else has to settle their removal");
    await settle(tx, id, "refused", person.personId, ctx.now(), input.reason);
    await appendTrail(ctx, tx, {
      act: "approval.refused",
      subjectKind: "approval",
      subjectId: id,
      facts: { kind, ...subject, proposedBy },
    });
    return approvalOrThrow(tx, id);
  });
}
