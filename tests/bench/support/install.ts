import { eq } from "drizzle-orm";
import type { Database } from "@/db/client";
import { policies } from "@/db/schema/policies";
import { ensureScorerInUse } from "@/lib/learning/install";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { ensureFirstPolicy } from "@/lib/policy/install";
import type { PolicyTerms } from "@/lib/policy/schema";
import { contextOf } from "../../support/people";

/** A server that lives may still be at it; whoever comes second finds it done. */
export async function ensureInstalled(db: Database): Promise<void> {
  const ctx = contextOf(db, { kind: "system", job: "benchmark" });
  await ensureFirstPolicy(ctx);
  await ensureScorerInUse(ctx);
}

/** Puts terms of the benchmark's own in place of the first policy's, before anything is scored under it. */
export async function setTerms(db: Database, terms: Partial<PolicyTerms>): Promise<void> {
  await ensureInstalled(db);
  const [result] = await db
    .update(policies)
    .set({ terms: { ...DEFAULT_TERMS, ...terms } })
    .where(eq(policies.version, 1));
  if (result.affectedRows !== 1) throw new Error("The first policy is not there");
}
