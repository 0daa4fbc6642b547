import "server-only";
import { and, eq, gt, isNotNull, isNull } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { ledger } from "@/db/schema/cases";
import { outcomes } from "@/db/schema/outcomes";
import { reverseLines, withoutReversed } from "./reverse";
import { NOTHING_BOOKED } from "./rules";

type Payment = { transactionId: string; occurredAt: Date };

/**
 * Recoveries count against a loss only while there is one: books those that are known where the payment's label is
 * fraudulent, and takes them back where it no longer is. Calling it again changes nothing.
 */
export async function settleRecoveries(
  tx: Tx,
  { transactionId, occurredAt }: Payment,
  isFraudulent: boolean,
  bookedAt: Date,
): Promise<void> {
  const booked = await tx
    .select()
    .from(ledger)
    .where(
      and(eq(ledger.transactionId, transactionId), gt(ledger.recoveredMinor, 0), isNull(ledger.reversesId)),
    );
  const standing = await withoutReversed(tx, booked);
  if (!isFraudulent) return reverseLines(tx, standing, bookedAt, "nothing");
  const known = await tx
    .select({ outcomeId: outcomes.id, recoveredMinor: outcomes.recoversBaseMinor })
    .from(outcomes)
    .where(and(eq(outcomes.transactionId, transactionId), isNotNull(outcomes.recoversBaseMinor)));
  const present = new Set(standing.map((row) => row.outcomeId));
  const lines = known.flatMap(({ outcomeId, recoveredMinor }) =>
    present.has(outcomeId) || !recoveredMinor
      ? []
      : [{ ...NOTHING_BOOKED, transactionId, outcomeId, occurredAt, bookedAt, recoveredMinor }],
  );
  if (lines.length > 0) await tx.insert(ledger).values(lines);
}
