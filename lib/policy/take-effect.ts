import "server-only";
import { eq } from "drizzle-orm";
import type { Executor, Tx } from "@/db/client";
import { scorers } from "@/db/schema/scorers";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { logitOf } from "../decibans";
import { rebaseScorer } from "../learning/rebase";
import { type PolicyInForce, policyInForce } from "./read";
import { refreshCut } from "./thresholds";

/**
 * What has to follow when a policy comes into force: its review line, and the scorer's prior odds.
 * Locks the scorer, where the base rate is another.
 */
export async function takeEffect(ctx: Context, tx: Tx, policy: PolicyInForce): Promise<void> {
  await refreshCut(tx, policy, ctx.now());
  if (await hasOtherBaseRate(tx, policy)) await rebaseScorer(ctx, tx, policy.terms.baseRate);
}

/** Does the same for a version whose chosen moment has come. Running it again changes nothing. */
export async function applyPolicyInForce(ctx: Context): Promise<void> {
  demand(ctx, "policy.approve");
  const policy = await policyInForce(ctx.db, ctx.now());
  await refreshCut(ctx.db, policy, ctx.now());
  if (!(await hasOtherBaseRate(ctx.db, policy))) return;
  await inTransaction(ctx.db, (tx) => takeEffect(ctx, tx, policy));
}

async function hasOtherBaseRate(db: Executor, policy: PolicyInForce): Promise<boolean> {
  const [scorer] = await db.select({ options: scorers.options }).from(scorers).where(eq(scorers.inUse, 1));
  return scorer !== undefined && scorer.options.offset !== logitOf(policy.terms.baseRate);
}
