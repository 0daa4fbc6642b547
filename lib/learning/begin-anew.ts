import "server-only";
import { asc, eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { scorerSnapshots, scorers } from "@/db/schema/scorers";
import { newId } from "../new-id";
import { createScorer, type ScorerOptions } from "../scorer";

/** What the scorer in use has just come to have otherwise. */
export type Change = {
  options: Partial<Pick<ScorerOptions, "offset" | "dimension">>;
  signalSetVersion: number;
};

/**
 * Lets every candidate begin anew with what has changed for the scorer in use, so that the comparison stays one of
 * like with like. They catch up behind the decisions. The caller holds the lock of the scorer in use.
 * @returns which candidate goes on as which
 */
export async function beginCandidatesAnew(
  tx: Tx,
  now: Date,
  startedSeq: number,
  change: Change,
): Promise<{ from: string; to: string }[]> {
  const rows = await tx
    .select()
    .from(scorers)
    .where(eq(scorers.role, "candidate"))
    .orderBy(asc(scorers.id))
    .for("update");
  const pairs: { from: string; to: string }[] = [];
  for (const { inUse: _, ...row } of rows) {
    const scorer = createScorer({ ...row.options, ...change.options });
    const id = newId();
    await tx.update(scorers).set({ role: "dropped", changedAt: now }).where(eq(scorers.id, row.id));
    await tx.delete(scorerSnapshots).where(eq(scorerSnapshots.scorerId, row.id));
    await tx.insert(scorers).values({
      ...row,
      id,
      signalSetVersion: change.signalSetVersion,
      options: { ...scorer.options },
      logSeq: 0,
      state: Buffer.from(scorer.snapshot()),
      cumulativeLoss: 0,
      startedSeq,
      createdAt: now,
      changedAt: now,
    });
    pairs.push({ from: row.id, to: id });
  }
  return pairs;
}
