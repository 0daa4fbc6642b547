import "server-only";
import { and, eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { scorers } from "@/db/schema/scorers";
import { type HeldScorer, toHeld } from "./held-scorer";

/** What a candidate is and when it began, beside its state. */
export type HeldCandidate = HeldScorer & { startedSeq: number };

/**
 * Locks a candidate until the transaction ends; null when there is none of that id, or, with `skipLocked`, when
 * another server has it. The scorer in use, where it is needed too, is locked before.
 */
export async function lockCandidate(
  tx: Tx,
  id: string,
  { skipLocked = false } = {},
): Promise<HeldCandidate | null> {
  const [row] = await tx
    .select()
    .from(scorers)
    .where(and(eq(scorers.id, id), eq(scorers.role, "candidate")))
    .for("update", skipLocked ? { skipLocked } : {});
  return row ? { ...(await toHeld(tx, row)), startedSeq: row.startedSeq } : null;
}
