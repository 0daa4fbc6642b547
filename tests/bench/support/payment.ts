import { createHash } from "node:crypto";
import type { Database } from "@/db/client";
import { transactions } from "@/db/schema/transactions";
import { newId } from "@/lib/new-id";

/** One payment for rows that must point to one. @returns its identifier */
export async function insertPayment(db: Database): Promise<string> {
  const id = newId();
  const at = new Date();
  await db.insert(transactions).values({
    id,
    source: "bench",
    externalId: id,
    contentHash: createHash("sha256").update(id).digest(),
    receivedAt: at,
    occurredAt: at,
    amountMinor: 1_000,
    currency: "EUR",
    amountBaseMinor: 1_000,
    direction: "outgoing",
    channel: "card_remote",
    accountId: "account",
    counterpartyId: "shop",
    action: "review",
    paymentState: "settled",
  });
  return id;
}
