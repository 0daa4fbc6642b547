import "server-only";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { forbidden } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { policyRecordOrThrow } from "./records";
import type { PolicyRecord, WithdrawInput } from "./schema";
import { lockOpenProposal, settleProposal } from "./settle";

/** Takes one's own proposal back. */
export async function withdrawPolicy(ctx: Context, input: WithdrawInput): Promise<PolicyRecord> {
  const person = demandPerson(ctx, "policy.propose");
  return writeOnce(ctx, async (tx) => {
    const proposal = await lockOpenProposal(tx, input.id);
    if (proposal.proposedBy !== person.personId) throw forbidden("Only its proposer can withdraw a proposal");
    await settleProposal(tx, proposal.id, {
      state: "withdrawn",
      settledBy: person.personId,
      settledAt: ctx.now(),
    });
    await appendTrail(ctx, tx, {
      act: "policy.withdrawn",
      subjectKind: "policy",
      subjectId: proposal.id,
      facts: { basedOnVersion: proposal.basedOnVersion },
    });
    return policyRecordOrThrow(tx, proposal.id);
  });
}
