import "server-only";
import { setImmediate } from "node:timers/promises";
import type { Database } from "@/db/client";
import { findStored } from "./find-stored";
import { type Payment, readItem } from "./read-item";
import { otherContentResult, rejectedResult } from "./results";
import type { TransactionResult } from "./schema";

/** A long batch lets others have their turn after so many items. */
const ITEMS_IN_A_ROW = 200;

/** An item's result where it is known already, or its place among the payments to store. */
export type Slot = { result: TransactionResult } | { place: number; isRepeat: boolean };

/** Tells bad items, repeats of stored payments and repeats within the batch from new payments. */
export async function sortItems(
  db: Database,
  source: string,
  items: readonly unknown[],
  exempt: ReadonlySet<string>,
  now: Date,
): Promise<{ slots: Slot[]; payments: Payment[] }> {
  const read = [];
  for (const [index, item] of items.entries()) {
    if (index % ITEMS_IN_A_ROW === ITEMS_IN_A_ROW - 1) await setImmediate();
    read.push(readItem(item, now, exempt));
  }
  const sound = read.flatMap((item) => ("payment" in item ? item.payment.externalId : []));
  const stored = await findStored(db, source, sound);
  const payments: Payment[] = [];
  const places = new Map<string, number>();
  const slots = read.map((item): Slot => {
    if ("errors" in item) return { result: rejectedResult(item.externalId, item.errors) };
    const { payment } = item;
    const known = stored.get(payment.externalId);
    if (known) {
      const isSame = known.contentHash.equals(payment.contentHash);
      return { result: isSame ? known.result : otherContentResult(payment.externalId) };
    }
    const place = places.get(payment.externalId);
    if (place === undefined) {
      places.set(payment.externalId, payments.length);
      return { place: payments.push(payment) - 1, isRepeat: false };
    }
    const isSame = payments[place]?.contentHash.equals(payment.contentHash) ?? false;
    return isSame ? { place, isRepeat: true } : { result: otherContentResult(payment.externalId) };
  });
  return { slots, payments };
}
