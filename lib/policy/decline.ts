import "server-only";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { forbidden } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { policyRecordOrThrow } from "./records";
import type { DeclineInput, PolicyRecord } from "./schema";
import { lockOpenProposal, settleProposal } from "./settle";

/** Turns somebody else's proposal down and says why. Its proposer withdraws it instead. */
export async function declinePolicy(ctx: Context, input: DeclineInput): Promise<PolicyRecord> {
  const person = demandPerson(ctx, "policy.approve");
  return writeOnce(ctx, async (tx) => {
    const proposal = await lockOpenProposal(tx, input.id);
    if (proposal.proposedBy === person.personId) throw forbidden("You proposed this; you can withdraw it");
    await settleProposal(tx, proposal.id, {
      state: "declined",
      settledBy: person.personId,
      settledAt: ctx.now(),
      refusalReason: input.reason,
    });
    await appendTrail(ctx, tx, {
      act: "policy.declined",
      subjectKind: "policy",
      subjectId: proposal.id,
      facts: { basedOnVersion: proposal.basedOnVersion },
    });
    return policyRecordOrThrow(tx, proposal.id);
  });
}
