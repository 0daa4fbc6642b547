import "server-only";
import { inArray } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { transactions } from "@/db/schema/transactions";

export type Named = { transactionId: string; isAmbiguous: boolean };

/**
 * Which payment an identifier names: the sender's own first, else the only one that any source has. Two other
 * sources that both have it leave it open which is meant. Null where the payment has not arrived.
 */
export async function findNamedPayments(
  db: Executor,
  source: string,
  externalIds: readonly string[],
): Promise<(externalId: string) => Named | null> {
  const ids = [...new Set(externalIds)];
  const rows =
    ids.length === 0
      ? []
      : await db
          .select({ id: transactions.id, source: transactions.source, externalId: transactions.externalId })
          .from(transactions)
          .where(inArray(transactions.externalId, ids));
  return (externalId) => {
    const matching = rows.filter((row) => row.externalId === externalId);
    const own = matching.find((row) => row.source === source);
    const [only, ...others] = own ? [own] : matching;
    return only ? { transactionId: only.id, isAmbiguous: others.length > 0 } : null;
  };
}
