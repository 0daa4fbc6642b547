import "server-only";
import { eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { ledger } from "@/db/schema/cases";
import { isNothing, reversed } from "./rules";

export type LedgerRow = typeof ledger.$inferSelect;

/** All that was ever booked on a payment, reversals included. */
export function linesOn(tx: Tx, transactionId: string): Promise<LedgerRow[]> {
  return tx.select().from(ledger).where(eq(ledger.transactionId, transactionId));
}

/** The lines that no other of these takes back. A line and its reversal share decision, outcome and payment. */
export function standingAmong(rows: readonly LedgerRow[]): LedgerRow[] {
  const taken = new Set(rows.map((row) => row.reversesId));
  return rows.filter((row) => row.reversesId === null && !taken.has(row.id));
}

/** Lines that outcomes booked for a label. Recoveries are no labels. */
export const isOutcomeLabel = (row: LedgerRow): boolean => row.outcomeId !== null && row.recoveredMinor === 0;

/** Books the opposite of each standing line. */
export async function reverseLines(
  tx: Tx,
  standing: readonly LedgerRow[],
  bookedAt: Date,
  keep: "nothing" | "review_cost",
): Promise<void> {
  const reversals = standing.flatMap(({ id, detail: _, ...row }) => {
    const opposite = reversed(row);
    const line = keep === "review_cost" ? { ...opposite, reviewCostMinor: 0 } : opposite;
    // A finding without money leaves nothing to take back but its place in the counts of its typology.
    return isNothing(line) && row.typology === null ? [] : [{ ...row, ...line, reversesId: id, bookedAt }];
  });
  if (reversals.length > 0) await tx.insert(ledger).values(reversals);
}
