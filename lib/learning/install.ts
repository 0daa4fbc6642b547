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
import { DIMENSION } from "../signals/catalogue";
import { catalogueDefinition } from "../signals/signal-set";
import { appendTrail } from "../trail/append";

/** The catalogue alone; each switch of an own signal makes a further one. */
const FIRST_SET = 1;

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
        signalSetVersion: FIRST_SET,
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
          version: FIRST_SET,
          // With their formulas: years later a score can be explained from the record alone.
          definition: catalogueDefinition(),
          createdAt: now,
          rescoredAt: now,
        })
        .onDuplicateKeyUpdate({ set: { version: FIRST_SET } });
      await appendTrail(ctx, tx, {
        act: "scorer.installed",
        subjectKind: "scorer",
        subjectId: id,
        facts: { method: scorer.method, signalSetVersion: FIRST_SET, policyVersion },
      });
    });
  } catch (error) {
    if (!isDuplicate(error)) throw error;
  }
}
