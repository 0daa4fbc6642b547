import "server-only";
import { and, eq, inArray } from "drizzle-orm";
import type { Database } from "@/db/client";
import { outbox } from "@/db/schema/mail";
import { people, personRoles } from "@/db/schema/people";
import { policies } from "@/db/schema/policies";
import { inTransaction } from "@/db/tx";
import { approvalWantedMail } from "@/emails/approval-wanted";
import { CAPABILITIES } from "../auth/access";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { enqueueMail, type Message } from "../mail/enqueue";
import { appendTrail } from "../trail/append";
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
  const approvers = await listApprovers(ctx.db);
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
    await queueNew(ctx, policy.id, messages, appUrl);
  }
}

async function queueNew(
  ctx: Context,
  policyId: string,
  messages: readonly Message[],
  appUrl: string,
): Promise<void> {
  const keys = messages.map(({ dedupeKey }) => dedupeKey);
  if (keys.length === 0) return;
  const queued = await ctx.db
    .select({ key: outbox.dedupeKey })
    .from(outbox)
    .where(inArray(outbox.dedupeKey, keys));
  const fresh = messages.filter(({ dedupeKey }) => !queued.some(({ key }) => key === dedupeKey));
  if (fresh.length === 0) return;
  await inTransaction(ctx.db, async (tx) => {
    const asked: string[] = [];
    for (const message of fresh) {
      if (await enqueueMail(tx, message, { appUrl, now: ctx.now() })) asked.push(message.personId);
    }
    if (asked.length === 0) return;
    await appendTrail(ctx, tx, {
      act: "policy.approval_asked",
      subjectKind: "policy",
      subjectId: policyId,
      facts: { people: asked },
    });
  });
}

function listApprovers(db: Database): Promise<{ id: string; email: string }[]> {
  return db
    .selectDistinct({ id: people.id, email: people.email })
    .from(people)
    .innerJoin(personRoles, eq(personRoles.personId, people.id))
    .where(
      and(eq(people.state, "active"), inArray(personRoles.role, [...CAPABILITIES["policy.approve"].roles])),
    );
}
