import "server-only";
import { and, eq, inArray, isNotNull, isNull } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { ledger } from "@/db/schema/cases";
import { isNothing, reversed } from "./rules";

type LedgerRow = typeof ledger.$inferSelect;

/** Lines that outcomes booked for a label and nothing has taken back. Recoveries are no labels and stay. */
export async function standingOutcomeLines(tx: Tx, transactionId: string): Promise<LedgerRow[]> {
  const rows = await tx
    .select()
    .from(ledger)
    .where(
      and(
        eq(ledger.transactionId, transactionId),
        isNotNull(ledger.outcomeId),
        eq(ledger.recoveredMinor, 0),
        isNull(ledger.reversesId),
      ),
    );
  return withoutReversed(tx, rows);
}

/** Books the opposite of each line that has not been taken back yet. */
export async function reverseLines(
  tx: Tx,
  rows: readonly LedgerRow[],
  bookedAt: Date,
  keep: "nothing" | "review_cost",
): Promise<void> {
  const standing = await withoutReversed(tx, rows);
  const reversals = standing.flatMap(({ id, detail: _, ...row }) => {
    const opposite = reversed(row);
    const line = keep === "review_cost" ? { ...opposite, reviewCostMinor: 0 } : opposite;
    // A finding without money leaves nothing to take back but its place in the counts of its typology.
    return isNothing(line) && row.typology === null ? [] : [{ ...row, ...line, reversesId: id, bookedAt }];
  });
  if (reversals.length > 0) await tx.insert(ledger).values(reversals);
}

/** The lines among these that no later line takes back. */
export async function withoutReversed(tx: Tx, rows: readonly LedgerRow[]): Promise<LedgerRow[]> {
  if (rows.length === 0) return [];
  const taken = await tx
    .select({ id: ledger.reversesId })
    .from(ledger)
    .where(
      inArray(
        ledger.reversesId,
        rows.map((row) => row.id),
      ),
    );
  const reversedIds = new Set(taken.map((row) => row.id));
  return rows.filter((row) => !reversedIds.has(row.id));
}
