import type { Label } from "@/lib/scorer";
import { Activity, type PastPayment } from "@/lib/signals/activity";
import type { PaymentFields, PaymentHistory } from "@/lib/signals/facts";
import { LabelledPast } from "@/lib/signals/labelled-past";

export const HOUR = 3_600_000;
export const DAY = 24 * HOUR;
export const NOON = Date.parse("2026-06-15T12:00:00Z");

export const fullPayment: PaymentFields = {
  occurredAtMs: NOON,
  amountBaseMinor: 20_000,
  direction: "outgoing",
  channel: "card_remote",
  remote: true,
  counterpartyId: "shop-1",
  cardRef: "card-1",
  deviceId: "device-1",
  counterpartyCountry: "FR",
  accountCountry: "DE",
  authentication: "single",
  accountOpenedAtMs: NOON - 365 * DAY,
  upstreamScore: 0.75,
  ruleHits: 3,
};

/** What a sender passes along who knows only time, account, counterparty, channel and amount. */
export const barePayment: PaymentFields = {
  ...fullPayment,
  channel: "card_present",
  remote: null,
  cardRef: null,
  deviceId: null,
  counterpartyCountry: null,
  accountCountry: null,
  authentication: null,
  accountOpenedAtMs: null,
  upstreamScore: null,
  ruleHits: null,
};

type Past = Partial<Omit<PastPayment, "atMs">> & { agoMs: number };

export function activityOf(...past: Past[]): Activity {
  const activity = new Activity();
  for (const { agoMs, ...rest } of past) {
    activity.add({
      amountBaseMinor: 1_000,
      other: "shop-9",
      device: null,
      country: null,
      incoming: false,
      ...rest,
      atMs: NOON - agoMs,
    });
  }
  return activity;
}

export function labelsOf(...labels: { agoMs: number; label: Label; transactionId?: string }[]): LabelledPast {
  const past = new LabelledPast();
  for (const { agoMs, label, transactionId = "other" } of labels) {
    past.add({ atMs: NOON - agoMs, label, transactionId });
  }
  return past;
}

export const entity = (activity = activityOf(), labels = labelsOf()) => ({ activity, labels });

export const noHistory = (): PaymentHistory => ({
  account: entity(),
  card: entity(),
  device: entity(),
  counterparty: entity(),
});

export const bareHistory = (): PaymentHistory => ({ ...noHistory(), card: null, device: null });
