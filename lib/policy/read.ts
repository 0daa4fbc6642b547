import "server-only";
import { and, desc, eq, isNotNull, lte } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { policies } from "@/db/schema/policies";
import type { PolicyTerms } from "./schema";

export type PolicyInForce = { version: number; terms: PolicyTerms; effectiveAt: Date };

/**
 * The newest approved version whose moment has come: a later version also ends one that still waits for its moment.
 * @throws Error on an installation without one
 */
export async function policyInForce(db: Executor, now: Date): Promise<PolicyInForce> {
  const [row] = await db
    .select({ version: policies.version, terms: policies.terms, effectiveAt: policies.effectiveAt })
    .from(policies)
    .where(and(eq(policies.state, "approved"), lte(policies.effectiveAt, now)))
    .orderBy(desc(policies.version))
    .limit(1);
  if (row?.version == null || !row.effectiveAt)
    throw new Error("No policy is in force; the installation is not set up");
  return { version: row.version, terms: row.terms, effectiveAt: row.effectiveAt };
}

/** The newest approved version, in force or about to be: what a new proposal starts from. */
export async function newestApproved(db: Executor): Promise<{ version: number; terms: PolicyTerms }> {
  const [row] = await db
    .select({ version: policies.version, terms: policies.terms })
    .from(policies)
    .where(isNotNull(policies.version))
    .orderBy(desc(policies.version))
    .limit(1);
  if (row?.version == null) throw new Error("No policy is approved; the installation is not set up");
  return { version: row.version, terms: row.terms };
}
