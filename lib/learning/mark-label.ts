import "server-only";
import { eq, inArray } from "drizzle-orm";
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
  await tx.update(transactions).set({ label }).where(eq(transactions.id, transaction.id));
  if (label === null) await forgetEntities(tx, [transaction.id]);
  else await markEntities(tx, transaction, label, now);
}

/** Takes the transactions out of the index of labelled entities, which history signals are drawn from. */
export async function forgetEntities(tx: Tx, transactionIds: readonly string[]): Promise<void> {
  await tx.delete(labelledEntities).where(inArray(labelledEntities.transactionId, [...transactionIds]));
}

/** Has the entities of a transaction known as labelled. */
export async function markEntities(
  tx: Tx,
  transaction: LabelledTransaction,
  label: Label,
  now: Date,
): Promise<void> {
  const { id: transactionId, occurredAt } = transaction;
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
