import "server-only";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { forbidden } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { approvalOrThrow } from "./read";
import type { ApprovalView, SettleApprovalInput } from "./schema";
import { lockWaiting, settle } from "./waiting";

/** Takes one's own proposal back. */
export async function withdrawProposal(ctx: Context, input: SettleApprovalInput): Promise<ApprovalView> {
  const person = demandPerson(ctx, "scorer.manage");
  return writeOnce(ctx, async (tx) => {
    const { id, kind, subject, proposedBy } = await lockWaiting(tx, input.id);
    if (proposedBy !== person.personId) throw forbidden("Only its proposer can withdraw a proposal");
    await settle(tx, id, "withdrawn", person.personId, ctx.now());
    await appendTrail(ctx, tx, {
      act: "approval.withdrawn",
      subjectKind: "approval",
      subjectId: id,
      facts: { kind, ...subject },
    });
    return approvalOrThrow(tx, id);
  });
}
