import { Activity } from "./activity";
import { ENTITY_KINDS, type EntityKind, HISTORY_MS, type PaymentHistory } from "./facts";
import { LabelledPast } from "./labelled-past";

/** What of a payment leads to its history. */
export type PaymentKeys = {
  occurredAtMs: number;
  accountId: string;
  cardRef: string | null;
  deviceId: string | null;
  counterpartyId: string;
};

/** What of a payment becomes history of later ones. */
export type PaymentTrace = PaymentKeys & {
  amountBaseMinor: number | null;
  direction: "outgoing" | "incoming";
  counterpartyCountry: string | null;
};

/** One account, card, device or counterparty of a batch and the span of time that its payments look back on. */
export type KnownEntity = {
  kind: EntityKind;
  key: string;
  fromMs: number;
  toMs: number;
  activity: Activity;
  labels: LabelledPast;
};

/** History of every entity that a batch of payments touches. */
export class KnownHistory {
  private readonly byKind: Record<EntityKind, Map<string, KnownEntity>> = {
    account: new Map(),
    card: new Map(),
    device: new Map(),
    counterparty: new Map(),
  };

  constructor(payments: Iterable<PaymentKeys>) {
    for (const payment of payments) {
      for (const kind of ENTITY_KINDS) this.expect(kind, entityKey(payment, kind), payment.occurredAtMs);
    }
  }

  entities(kind: EntityKind): KnownEntity[] {
    return [...this.byKind[kind].values()];
  }

  find(kind: EntityKind, key: string): KnownEntity | undefined {
    return this.byKind[kind].get(key);
  }

  of(payment: PaymentKeys): PaymentHistory {
    const entity = (kind: EntityKind) => {
      const key = entityKey(payment, kind);
      return key === null ? null : (this.byKind[kind].get(key) ?? null);
    };
    return {
      account: entity("account"),
      card: entity("card"),
      device: entity("device"),
      counterparty: entity("counterparty"),
    };
  }

  /** A payment of the batch is history to those after it. */
  add(payment: PaymentTrace): void {
    for (const kind of ENTITY_KINDS) {
      const key = entityKey(payment, kind);
      if (key !== null) this.byKind[kind].get(key)?.activity.add(asPastPayment(payment, kind));
    }
  }

  private expect(kind: EntityKind, key: string | null, atMs: number): void {
    if (key === null) return;
    const known = this.byKind[kind].get(key);
    if (known) {
      known.fromMs = Math.min(known.fromMs, atMs - HISTORY_MS);
      known.toMs = Math.max(known.toMs, atMs);
    } else {
      const activity = new Activity();
      const labels = new LabelledPast();
      this.byKind[kind].set(key, { kind, key, fromMs: atMs - HISTORY_MS, toMs: atMs, activity, labels });
    }
  }
}

function entityKey(payment: PaymentKeys, kind: EntityKind): string | null {
  switch (kind) {
    case "account":
      return payment.accountId;
    case "card":
      return payment.cardRef;
    case "device":
      return payment.deviceId;
    case "counterparty":
      return payment.counterpartyId;
  }
}

function asPastPayment(payment: PaymentTrace, kind: EntityKind) {
  return {
    atMs: payment.occurredAtMs,
    amountBaseMinor: payment.amountBaseMinor ?? Number.NaN,
    other: kind === "account" ? payment.counterpartyId : payment.accountId,
    device: payment.deviceId,
    country: payment.counterpartyCountry,
    incoming: payment.direction === "incoming",
  };
}
