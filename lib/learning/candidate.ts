import "server-only";
import { and, eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { scorers } from "@/db/schema/scorers";
import { type HeldScorer, toHeld } from "./held-scorer";

/**
 * Locks a candidate until the transaction ends; null when there is none of that id, or, with `skipLocked`, when
 * another server has it. The scorer in use, where it is needed too, is locked before.
 */
export async function lockCandidate(
  tx: Tx,
  id: string,
  { skipLocked = false } = {},
): Promise<HeldScorer | null> {
  const [row] = await tx
    .select()
    .from(scorers)
    .where(and(eq(scorers.id, id), eq(scorers.role, "candidate")))
    .for("update", skipLocked ? { skipLocked } : {});
  return row ? toHeld(tx, row) : null;
}
