import { eq } from "drizzle-orm";
import type { Database } from "@/db/client";
import { policies } from "@/db/schema/policies";
import { ensureScorerInUse } from "@/lib/learning/install";
import { newId } from "@/lib/new-id";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { ensureFirstPolicy } from "@/lib/policy/install";
import type { PolicyTerms } from "@/lib/policy/schema";

/** Puts terms of the benchmark's own in place of the first policy's, before anything is scored under it. */
export async function setTerms(db: Database, terms: Partial<PolicyTerms>): Promise<void> {
  // The app may still be at it; whoever comes second finds it done.
  const actor = { kind: "system" as const, job: "bench" };
  const ctx = { db, actor, now: () => new Date(), requestId: newId(), idempotency: null };
  await ensureFirstPolicy(ctx);
  await ensureScorerInUse(ctx);
  const [result] = await db
    .update(policies)
    .set({ terms: { ...DEFAULT_TERMS, ...terms } })
    .where(eq(policies.version, 1));
  if (result.affectedRows !== 1) throw new Error("The first policy is not there");
}
