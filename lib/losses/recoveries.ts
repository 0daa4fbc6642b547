import "server-only";
import { and, eq, isNotNull } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { ledger } from "@/db/schema/cases";
import { outcomes } from "@/db/schema/outcomes";
import { type LedgerRow, linesOn, reverseLines, standingAmong } from "./reverse";
import { NOTHING_BOOKED } from "./rules";

type Payment = {
  transactionId: string;
  occurredAt: Date;
  /** All its lines, where the caller has read them before. */
  lines?: readonly LedgerRow[];
};

/**
 * Recoveries count against a loss only while there is one: books those that are known where the payment's label is
 * fraudulent, and takes them back where it no longer is. Calling it again changes nothing.
 */
export async function settleRecoveries(
  tx: Tx,
  { transactionId, occurredAt, lines: read }: Payment,
  isFraudulent: boolean,
  bookedAt: Date,
): Promise<void> {
  const lines = read ?? (await linesOn(tx, transactionId));
  const standing = standingAmong(lines).filter((row) => row.recoveredMinor > 0);
  if (!isFraudulent) return reverseLines(tx, standing, bookedAt, "nothing");
  const known = await tx
    .select({ outcomeId: outcomes.id, recoveredMinor: outcomes.recoversBaseMinor })
    .from(outcomes)
    .where(and(eq(outcomes.transactionId, transactionId), isNotNull(outcomes.recoversBaseMinor)));
  const present = new Set(standing.map((row) => row.outcomeId));
  const missing = known.flatMap(({ outcomeId, recoveredMinor }) =>
    present.has(outcomeId) || !recoveredMinor
      ? []
      : [{ ...NOTHING_BOOKED, transactionId, outcomeId, occurredAt, bookedAt, recoveredMinor }],
  );
  if (missing.length > 0) await tx.insert(ledger).values(missing);
}
