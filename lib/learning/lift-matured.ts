import "server-only";
import type { Tx } from "@/db/client";
import type { HeldScorer } from "./held-scorer";
import type { LabelInForce } from "./place";
import { replaceLabels } from "./replace";

/**
 * Takes labels that only maturity gave away again, before somebody's finding is learned: the weights are then those
 * of a log in which they never stood. What is lifted leaves `inForce`. The caller holds the scorer's lock.
 * @returns whether there was any, so that waiting cases must be computed anew
 */
export async function liftMatured(
  tx: Tx,
  held: HeldScorer,
  now: Date,
  inForce: Map<string, LabelInForce>,
): Promise<boolean> {
  const matured = [...inForce].filter(([, { kind }]) => kind === "matured");
  if (matured.length === 0) return false;
  const nobody = { caseId: null, decisionId: null, outcomeId: null, personId: null };
  await replaceLabels(
    tx,
    held,
    now,
    matured.map(([transactionId, { place }]) => ({
      ...nobody,
      kind: "matured" as const,
      transactionId,
      place,
      label: 0 as const,
    })),
  );
  for (const [transactionId] of matured) inForce.delete(transactionId);
  return true;
}
