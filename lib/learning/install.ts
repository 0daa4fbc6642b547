import "server-only";
import { eq } from "drizzle-orm";
import { isDuplicate } from "@/db/errors";
import { scorers } from "@/db/schema/scorers";
import { signalSets } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import type { Context } from "../context";
import { logitOf } from "../decibans";
import { newId } from "../new-id";
import { policyInForce } from "../policy/read";
import { createScorer } from "../scorer";
import { CATALOGUE, DIMENSION, SIGNAL_SET_VERSION } from "../signals/catalogue";
import { formulasOf } from "../signals/signal";
import { appendTrail } from "../trail/append";

/** Puts an untrained scorer in use on a new installation; of two servers starting at once, one does it. */
export async function ensureScorerInUse(ctx: Context): Promise<void> {
  const [present] = await ctx.db
    .select({ id: scorers.id })
    .from(scorers)
    .where(eq(scorers.inUse, 1))
    .limit(1);
  if (present) return;
  const now = ctx.now();
  const { terms, version: policyVersion } = await policyInForce(ctx.db, now);
  const scorer = createScorer({ method: "improper", dimension: DIMENSION, offset: logitOf(terms.baseRate) });
  const id = newId();
  try {
    await inTransaction(ctx.db, async (tx) => {
      await tx.insert(scorers).values({
        id,
        name: "First scorer",
        method: scorer.method,
        role: "in_use",
        signalSetVersion: SIGNAL_SET_VERSION,
        options: { ...scorer.options },
        version: 1,
        logSeq: 0,
        state: Buffer.from(scorer.snapshot()),
        cumulativeLoss: 0,
        createdAt: now,
        changedAt: now,
      });
      await tx
        .insert(signalSets)
        .values({
          version: SIGNAL_SET_VERSION,
          // With their formulas: years later a score can be explained from the record alone.
          definition: CATALOGUE.map((signal) => ({ key: signal.key, formulas: formulasOf(signal) })),
          createdAt: now,
        })
        .onDuplicateKeyUpdate({ set: { version: SIGNAL_SET_VERSION } });
      await appendTrail(ctx, tx, {
        act: "scorer.installed",
        subjectKind: "scorer",
        subjectId: id,
        facts: { method: scorer.method, signalSetVersion: SIGNAL_SET_VERSION, policyVersion },
      });
    });
  } catch (error) {
    if (!isDuplicate(error)) throw error;
  }
}
