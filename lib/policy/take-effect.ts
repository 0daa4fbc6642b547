import "server-only";
import { eq } from "drizzle-orm";
import type { Executor, Tx } from "@/db/client";
import { scorers } from "@/db/schema/scorers";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { logitOf } from "../decibans";
import { findScorerInUse } from "../learning/held-scorer";
import { rebaseScorer } from "../learning/rebase";
import { type PolicyInForce, policyInForce } from "./read";
import { refreshCut } from "./thresholds";

/**
 * What has to follow when a policy comes into force: its review line, and the scorer's prior odds.
 * Locks the scorer, where the base rate is another.
 */
export async function takeEffect(ctx: Context, tx: Tx, policy: PolicyInForce): Promise<void> {
  if (await hasOtherBaseRate(tx, policy)) await rebaseScorer(ctx, tx, policy.terms.baseRate);
  await takeCut(tx, policy, ctx.now());
}

/** Does the same for a version whose chosen moment has come. Running it again changes nothing. */
export async function applyPolicyInForce(ctx: Context): Promise<void> {
  demand(ctx, "policy.approve");
  const policy = await policyInForce(ctx.db, ctx.now());
  if (await hasOtherBaseRate(ctx.db, policy))
    await inTransaction(ctx.db, (tx) => takeEffect(ctx, tx, policy));
  else await takeCut(ctx.db, policy, ctx.now());
}

/** An installation that is still being set up has no scorer, and no scores to take a cut from either. */
async function takeCut(db: Executor, policy: PolicyInForce, now: Date): Promise<void> {
  const held = await findScorerInUse(db);
  if (held) await refreshCut(db, policy, now, held);
}

async function hasOtherBaseRate(db: Executor, policy: PolicyInForce): Promise<boolean> {
  const [scorer] = await db.select({ options: scorers.options }).from(scorers).where(eq(scorers.inUse, 1));
  return scorer !== undefined && scorer.options.offset !== logitOf(policy.terms.baseRate);
}
