import "server-only";
import { eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { scorers } from "@/db/schema/scorers";
import type { Context } from "../context";
import { logitOf } from "../decibans";
import { newId } from "../new-id";
import { createScorer } from "../scorer";
import { appendTrail } from "../trail/append";
import { beginCandidatesAnew } from "./begin-anew";
import { foldLog } from "./fold";
import { lockScorerInUse } from "./held-scorer";
import { keepSnapshot } from "./learn";

/**
 * Re-runs the log with another base rate as the prior odds, under a scorer of its own: the old one is retired
 * with its last version, so that a score it gave can still be derived. Candidates begin anew from that base rate.
 * @param baseRate prior probability of fraud, in (0, 1)
 */
export async function rebaseScorer(ctx: Context, tx: Tx, baseRate: number): Promise<void> {
  const now = ctx.now();
  const held = await lockScorerInUse(tx);
  const offset = logitOf(baseRate);
  if (held.scorer.options.offset === offset) return;
  const options = { ...held.scorer.options, offset };
  const { scorer, snapshots } = await foldLog(
    tx,
    { scorer: createScorer(options), place: 0, signals: held.signals },
    held.logSeq,
  );
  const id = newId();
  await tx.update(scorers).set({ role: "retired", changedAt: now }).where(eq(scorers.id, held.id));
  await tx.insert(scorers).values({
    id,
    name: held.name,
    method: scorer.method,
    role: "in_use",
    signalSetVersion: held.signalSetVersion,
    options: { ...scorer.options },
    version: held.version + 1,
    logSeq: held.logSeq,
    state: Buffer.from(scorer.snapshot()),
    cumulativeLoss: held.cumulativeLoss,
    createdAt: now,
    changedAt: now,
  });
  for (const { place, state } of snapshots) await keepSnapshot(tx, id, place, state);
  const { signalSetVersion } = held;
  const candidates = await beginCandidatesAnew(tx, now, held.logSeq, {
    options: { offset },
    signalSetVersion,
  });
  await appendTrail(ctx, tx, {
    act: "scorer.rebased",
    subjectKind: "scorer",
    subjectId: id,
    facts: { from: held.id, baseRate, version: held.version + 1, labels: scorer.labels, candidates },
  });
}
