import { createHash } from "node:crypto";
import type { Database } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { scores, transactions } from "@/db/schema/transactions";
import { newId } from "@/lib/new-id";
import type { Channel } from "@/lib/transactions/codes";

type Arrival = { logit: number; occurredAt: Date; takenAt: Date; amountMinor?: number; channel?: Channel };

/** Payments with a score each, as intake would have left them; returns their ids in order. */
export async function insertArrivals(db: Database, arrivals: readonly Arrival[]): Promise<string[]> {
  const ids = arrivals.map(() => newId());
  for (let from = 0; from < arrivals.length; from += 1000) {
    const part = arrivals.slice(from, from + 1000);
    const idOf = (index: number) => ids[from + index] as string;
    await db.insert(transactions).values(
      part.map((arrival, index) => ({
        id: idOf(index),
        source: "test",
        externalId: idOf(index),
        contentHash: createHash("sha256").update(idOf(index)).digest(),
        receivedAt: arrival.takenAt,
        occurredAt: arrival.occurredAt,
        amountMinor: arrival.amountMinor ?? 1000,
        currency: "EUR",
        amountBaseMinor: arrival.amountMinor ?? 1000,
        direction: "outgoing" as const,
        channel: arrival.channel ?? ("card_remote" as const),
        accountId: "A1",
        counterpartyId: "C1",
        action: "pass" as const,
        paymentState: "settled" as const,
      })),
    );
    await db.insert(scores).values(
      part.map((arrival, index) => ({
        transactionId: idOf(index),
        kind: "arrival" as const,
        takenAt: arrival.takenAt,
        vector: vectorToBytes(Float64Array.of(arrival.logit)),
        missing: Buffer.alloc(1),
        signalSetVersion: 1,
        scorerVersion: 0,
        policyVersion: 1,
        logit: arrival.logit,
        leverage: 0.1,
        zone: "pass" as const,
      })),
    );
  }
  return ids;
}
