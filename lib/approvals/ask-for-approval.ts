import "server-only";
import { eq } from "drizzle-orm";
import { approvals } from "@/db/schema/approvals";
import { people } from "@/db/schema/people";
import { secondPersonWantedMail } from "@/emails/second-person-wanted";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { askOnce, listPeopleWho } from "../mail/ask-once";
import type { ApprovalSubject } from "./codes";

/** Writes once to everybody who may settle what waits; its proposer, and whoever it is about, are not asked. */
export async function askForSecondPerson(ctx: Context, { appUrl }: { appUrl: string }): Promise<void> {
  demand(ctx, "approvals.settle");
  const waiting = await ctx.db
    .select({
      id: approvals.id,
      kind: approvals.kind,
      subject: approvals.subject,
      reason: approvals.reason,
      proposedBy: approvals.proposedBy,
      proposer: people.name,
    })
    .from(approvals)
    .innerJoin(people, eq(people.id, approvals.proposedBy))
    .where(eq(approvals.state, "waiting"));
  if (waiting.length === 0) return;
  const settlers = await listPeopleWho(ctx.db, "approvals.settle");
  for (const { id, kind, subject, reason, proposedBy, proposer } of waiting) {
    const mail = await secondPersonWantedMail({ proposer, kind, reason, appUrl });
    const messages = settlers
      .filter((settler) => settler.id !== proposedBy && settler.id !== personOf(subject))
      .map((settler) => ({
        ...mail,
        dedupeKey: `approval:${id}:${settler.id}`,
        kind: "approval_wanted" as const,
        personId: settler.id,
        recipient: settler.email,
      }));
    await askOnce(ctx, { act: "approval.asked", subjectKind: "approval", subjectId: id }, messages, appUrl);
  }
}

const personOf = (subject: ApprovalSubject) => ("personId" in subject ? subject.personId : null);
