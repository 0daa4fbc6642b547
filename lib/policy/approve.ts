import "server-only";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { conflict, forbidden, invalid } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { newestApproved } from "./read";
import { policyRecordOrThrow } from "./records";
import type { ApproveInput, PolicyRecord } from "./schema";
import { lockApprovals, lockOpenProposal, settleProposal } from "./settle";
import { takeEffect } from "./take-effect";

const FURTHEST_DAYS = 90;

/** Makes somebody else's proposal the next version, at once or from a later moment. */
export async function approvePolicy(ctx: Context, input: ApproveInput): Promise<PolicyRecord> {
  const person = demandPerson(ctx, "policy.approve");
  return writeOnce(ctx, async (tx) => {
    const now = ctx.now();
    await lockApprovals(tx);
    const proposal = await lockOpenProposal(tx, input.id);
    if (proposal.proposedBy === person.personId)
      throw forbidden("You proposed this; a second person has to approve it");
    const newest = await newestApproved(tx);
    if (newest.version !== proposal.basedOnVersion)
      throw conflict(
        `This was proposed against version ${proposal.basedOnVersion}, and version ${newest.version} has been approved since`,
      );
    const effectiveAt = momentOf(input.effectiveAt, now);
    const version = newest.version + 1;
    await settleProposal(tx, proposal.id, {
      state: "approved",
      settledBy: person.personId,
      settledAt: now,
      version,
      effectiveAt,
    });
    if (effectiveAt <= now) await takeEffect(ctx, tx, { version, terms: proposal.terms, effectiveAt });
    await appendTrail(ctx, tx, {
      act: "policy.approved",
      subjectKind: "policy",
      subjectId: proposal.id,
      facts: { version, replaces: newest.version, effectiveAt: effectiveAt.toISOString() },
    });
    return policyRecordOrThrow(tx, proposal.id);
  });
}

function momentOf(wished: string | null, now: Date): Date {
  if (wished === null) return now;
  const moment = new Date(wished);
  const path = "effectiveAt";
  if (moment < now) throw invalid([{ path, message: "lies in the past" }]);
  if (moment.getTime() > now.getTime() + FURTHEST_DAYS * 86_400_000)
    throw invalid([{ path, message: `must be within ${FURTHEST_DAYS} days` }]);
  return moment;
}
