import "server-only";
import { and, eq } from "drizzle-orm";
import { people } from "@/db/schema/people";
import { policies } from "@/db/schema/policies";
import { approvalWantedMail } from "@/emails/approval-wanted";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { askOnce, listPeopleWho } from "../mail/ask-once";
import { termChanges } from "./changes";
import { newestApproved } from "./read";

/** Writes once to everybody who may approve a proposal that still can be approved; its proposer is not one of them. */
export async function askForApproval(ctx: Context, { appUrl }: { appUrl: string }): Promise<void> {
  demand(ctx, "policy.approve");
  const newest = await newestApproved(ctx.db);
  const waiting = await ctx.db
    .select({ policy: policies, proposer: people.name })
    .from(policies)
    .innerJoin(people, eq(people.id, policies.proposedBy))
    .where(and(eq(policies.state, "proposed"), eq(policies.basedOnVersion, newest.version)));
  if (waiting.length === 0) return;
  const approvers = await listPeopleWho(ctx.db, "policy.approve");
  for (const { policy, proposer } of waiting) {
    const mail = await approvalWantedMail({
      proposer,
      reason: policy.reason,
      changes: termChanges(newest.terms, policy.terms).length,
      appUrl,
    });
    const messages = approvers
      .filter(({ id }) => id !== policy.proposedBy)
      .map(({ id, email }) => ({
        ...mail,
        dedupeKey: `approval:${policy.id}:${id}`,
        kind: "approval_wanted" as const,
        personId: id,
        recipient: email,
      }));
    const entry = { act: "policy.approval_asked", subjectKind: "policy", subjectId: policy.id };
    await askOnce(ctx, entry, messages, appUrl);
  }
}
