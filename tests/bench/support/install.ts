import { eq } from "drizzle-orm";
import type { Database } from "@/db/client";
import { policies } from "@/db/schema/policies";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import type { PolicyTerms } from "@/lib/policy/schema";

/** Puts terms of the benchmark's own in place of the first policy's, before anything is scored under it. */
export async function setTerms(db: Database, terms: Partial<PolicyTerms>): Promise<void> {
  const [result] = await db
    .update(policies)
    .set({ terms: { ...DEFAULT_TERMS, ...terms } })
    .where(eq(policies.version, 1));
  if (result.affectedRows !== 1) throw new Error("The first policy is not there");
}
