import "server-only";
import { and, eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { policies } from "@/db/schema/policies";
import { conflict, notFound } from "../errors";
import type { PolicyTerms } from "./schema";

/** A proposal that nobody has approved, declined or withdrawn yet, locked until the transaction ends. */
export type OpenProposal = { id: string; terms: PolicyTerms; basedOnVersion: number; proposedBy: string };

/** Approvals take their turn on the first version's row: it is always there and never changes. */
export async function lockApprovals(tx: Tx): Promise<void> {
  await tx.select({ id: policies.id }).from(policies).where(eq(policies.version, 1)).for("update");
}

/** @throws KnownError not_found, or conflict when it is settled already */
export async function lockOpenProposal(tx: Tx, id: string): Promise<OpenProposal> {
  const [row] = await tx.select().from(policies).where(eq(policies.id, id)).for("update");
  if (!row) throw notFound("The proposal");
  if (row.state !== "proposed" || row.proposedBy === null || row.basedOnVersion === null)
    throw conflict(`This proposal has already been ${row.state}`);
  return { id, terms: row.terms, basedOnVersion: row.basedOnVersion, proposedBy: row.proposedBy };
}

/** Closes a locked proposal; it must still be open. */
export async function settleProposal(
  tx: Tx,
  id: string,
  change: Pick<
    typeof policies.$inferInsert,
    "state" | "settledBy" | "settledAt" | "refusalReason" | "version" | "effectiveAt"
  >,
): Promise<void> {
  const [result] = await tx
    .update(policies)
    .set({ ...change, revision: 2 })
    .where(and(eq(policies.id, id), eq(policies.state, "proposed")));
  if (result.affectedRows !== 1) throw conflict("This proposal has just been settled by somebody else");
}
