import "server-only";
import { and, eq, inArray, ne } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { scores, transactions } from "@/db/schema/transactions";
import { acceptedResult } from "./results";
import type { TransactionResult } from "./schema";

export type Stored = { contentHash: Buffer; result: TransactionResult };

const IDENTIFIERS_IN_STATEMENT = 1_000;

/** Which of the source's identifiers have come in before, with what content and what answer. */
export async function findStored(
  db: Executor,
  source: string,
  externalIds: readonly string[],
): Promise<Map<string, Stored>> {
  const stored = new Map<string, Stored>();
  for (let from = 0; from < externalIds.length; from += IDENTIFIERS_IN_STATEMENT) {
    const some = externalIds.slice(from, from + IDENTIFIERS_IN_STATEMENT);
    const rows = await db
      .select({
        contentHash: transactions.contentHash,
        externalId: transactions.externalId,
        transactionId: transactions.id,
        action: transactions.action,
        logit: scores.logit,
        holdExpiresAt: transactions.holdExpiresAt,
        caseId: cases.id,
        policyVersion: scores.policyVersion,
        scorerVersion: scores.scorerVersion,
      })
      .from(transactions)
      .innerJoin(scores, and(eq(scores.transactionId, transactions.id), eq(scores.kind, "arrival")))
      // A sibling's case was opened later, by a reviewer; the sender was never told of it.
      .leftJoin(cases, and(eq(cases.transactionId, transactions.id), ne(cases.kind, "sibling")))
      .where(and(eq(transactions.source, source), inArray(transactions.externalId, some)));
    for (const { contentHash, ...accepted } of rows) {
      stored.set(accepted.externalId, { contentHash, result: acceptedResult("duplicate", accepted) });
    }
  }
  return stored;
}
