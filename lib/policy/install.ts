import "server-only";
import { isDuplicate } from "@/db/errors";
import { policies } from "@/db/schema/policies";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { newId } from "../new-id";
import { appendTrail } from "../trail/append";
import { DEFAULT_TERMS } from "./default-terms";

/** Puts the default terms in force on an installation without a policy; two servers starting at once agree on one. */
export async function ensureFirstPolicy(ctx: Context): Promise<void> {
  demand(ctx, "policy.approve");
  const [any] = await ctx.db.select({ id: policies.id }).from(policies).limit(1);
  if (any) return;
  const id = newId();
  const now = ctx.now();
  try {
    await inTransaction(ctx.db, async (tx) => {
      await tx.insert(policies).values({
        id,
        version: 1,
        state: "approved",
        terms: DEFAULT_TERMS,
        reason: "Terms of a new installation",
        proposedAt: now,
        settledAt: now,
        effectiveAt: now,
      });
      await appendTrail(ctx, tx, {
        act: "policy.installed",
        subjectKind: "policy",
        subjectId: id,
        facts: { version: 1, effectiveAt: now.toISOString() },
      });
    });
  } catch (error) {
    // The other server was first: version 1 is there, which is all that was wanted.
    if (!isDuplicate(error)) throw error;
  }
}
