import "server-only";
import { eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { labelledEntities, transactions } from "@/db/schema/transactions";
import type { Label } from "../scorer";

export type LabelledTransaction = {
  id: string;
  occurredAt: Date;
  accountId: string;
  counterpartyId: string;
  cardRef: string | null;
  deviceId: string | null;
};

/** Keeps the transaction's label and the index of labelled entities in step with the log; null takes the label away. */
export async function markLabel(
  tx: Tx,
  transaction: LabelledTransaction,
  label: Label | null,
  now: Date,
): Promise<void> {
  const { id: transactionId, occurredAt } = transaction;
  await tx.update(transactions).set({ label }).where(eq(transactions.id, transactionId));
  if (label === null) {
    await tx.delete(labelledEntities).where(eq(labelledEntities.transactionId, transactionId));
    return;
  }
  const keys = [
    ["account", transaction.accountId],
    ["counterparty", transaction.counterpartyId],
    ["card", transaction.cardRef],
    ["device", transaction.deviceId],
  ] as const;
  await tx
    .insert(labelledEntities)
    .values(
      keys.flatMap(([entityKind, entityKey]) =>
        entityKey === null
          ? []
          : [{ entityKind, entityKey, transactionId, label, occurredAt, labelledAt: now }],
      ),
    )
    .onDuplicateKeyUpdate({ set: { label, labelledAt: now } });
}
