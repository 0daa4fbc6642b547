import "server-only";
import { desc, eq, type SQL } from "drizzle-orm";
import { alias } from "drizzle-orm/mysql-core";
import type { Executor } from "@/db/client";
import { approvals } from "@/db/schema/approvals";
import { people } from "@/db/schema/people";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { notFound } from "../errors";
import type { ApprovalsInput, ApprovalsView, ApprovalView } from "./schema";

const SHOWN = 100;

/** What waits for a second person or has been settled, newest first. */
export async function listApprovals(ctx: Context, input: ApprovalsInput): Promise<ApprovalsView> {
  demand(ctx, "approvals.read");
  return { items: await read(ctx.db, input.state && eq(approvals.state, input.state)) };
}

/** @throws KnownError not_found */
export async function approvalOrThrow(db: Executor, id: string): Promise<ApprovalView> {
  const [approval] = await read(db, eq(approvals.id, id));
  if (!approval) throw notFound("The proposal");
  return approval;
}

async function read(db: Executor, where: SQL | undefined): Promise<ApprovalView[]> {
  const proposer = alias(people, "proposer");
  const settler = alias(people, "settler");
  const rows = await db
    .select({
      approvalId: approvals.id,
      kind: approvals.kind,
      subject: approvals.subject,
      state: approvals.state,
      reason: approvals.reason,
      proposedBy: approvals.proposedBy,
      proposer: proposer.name,
      proposedAt: approvals.proposedAt,
      settledBy: approvals.settledBy,
      settler: settler.name,
      settledAt: approvals.settledAt,
      settledReason: approvals.settledReason,
    })
    .from(approvals)
    .innerJoin(proposer, eq(proposer.id, approvals.proposedBy))
    .leftJoin(settler, eq(settler.id, approvals.settledBy))
    .where(where)
    .orderBy(desc(approvals.proposedAt), desc(approvals.id))
    .limit(SHOWN);
  return rows.map(({ proposer, settler, ...row }) => ({
    ...row,
    proposedBy: { id: row.proposedBy, name: proposer },
    proposedAt: row.proposedAt.toISOString(),
    settledBy: row.settledBy !== null && settler !== null ? { id: row.settledBy, name: settler } : null,
    settledAt: row.settledAt?.toISOString() ?? null,
  }));
}
