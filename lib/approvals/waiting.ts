import "server-only";
import { and, eq, sql } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { approvals } from "@/db/schema/approvals";
import { conflict, notFound } from "../errors";
import type { ApprovalKind, ApprovalState, ApprovalSubject } from "./codes";

/** A wish that nobody has settled yet, locked until the transaction ends. */
export type WaitingApproval = {
  id: string;
  kind: ApprovalKind;
  subject: ApprovalSubject;
  proposedBy: string;
};

/** @throws KnownError not_found, or conflict when it is settled already */
export async function lockWaiting(tx: Tx, id: string): Promise<WaitingApproval> {
  const [row] = await tx.select().from(approvals).where(eq(approvals.id, id)).for("update");
  if (!row) throw notFound("The proposal");
  if (row.state !== "waiting") throw conflict(`This proposal has already been ${row.state}`);
  return { id, kind: row.kind, subject: row.subject, proposedBy: row.proposedBy };
}

/** Closes a locked wish. */
export async function settle(
  tx: Tx,
  id: string,
  state: Exclude<ApprovalState, "waiting">,
  settledBy: string,
  settledAt: Date,
  settledReason: string | null = null,
): Promise<void> {
  const [result] = await tx
    .update(approvals)
    .set({ state, settledBy, settledAt, settledReason, revision: sql`${approvals.revision} + 1` })
    .where(and(eq(approvals.id, id), eq(approvals.state, "waiting")));
  if (result.affectedRows !== 1) throw conflict("This proposal has just been settled by somebody else");
}
