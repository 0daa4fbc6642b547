import type { Channel } from "../transactions/codes";
import { UNIT_MINOR } from "./amount-signals";
import { DAY_MS, hourOf } from "./facts";

/** What a formula may meet: a number, a yes or no that counts as 1 or 0, or a text that can only be compared. */
export type FormulaKind = "number" | "yes_no" | "text";

type FormulaField = { name: string; kind: FormulaKind; sentence: string };

/**
 * All that an own signal's formula may read of a payment, beside `attributes.<name>`. Accounts, counterparties, cards
 * and devices cannot be named: a formula stands in the trail, where no personal data belongs, and a list of suspects
 * is not a signal. Nothing here ever changes once a payment is stored, or a re-run of the log would not come out equal.
 */
export const FORMULA_FIELDS = [
  { name: "amount", kind: "number", sentence: "In the base currency, in hundreds of its smallest unit" },
  { name: "currency", kind: "text", sentence: "As sent, such as EUR" },
  { name: "direction", kind: "text", sentence: "outgoing or incoming" },
  { name: "channel", kind: "text", sentence: "Such as card_remote or instant_transfer" },
  {
    name: "remote",
    kind: "yes_no",
    sentence: "Whether the payer was elsewhere, where the channel leaves it open",
  },
  { name: "mcc", kind: "text", sentence: "Kind of merchant, four digits (ISO 18245)" },
  { name: "counterpartyCountry", kind: "text", sentence: "Two letters (ISO 3166-1)" },
  { name: "accountCountry", kind: "text", sentence: "Where the account is kept, two letters" },
  { name: "authentication", kind: "text", sentence: "strong, single, none or exempt" },
  {
    name: "accountAgeDays",
    kind: "number",
    sentence: "Days since the account was opened, with their fraction",
  },
  { name: "upstreamScore", kind: "number", sentence: "From 0 to 1, where the sender passes one along" },
  { name: "ruleHits", kind: "number", sentence: "How many rules the sender says were hit" },
  { name: "hour", kind: "number", sentence: "Hour of the day in UTC, 0 to 24, with its fraction" },
  { name: "weekday", kind: "number", sentence: "In UTC, 1 for Monday to 7 for Sunday" },
  { name: "hasCard", kind: "yes_no", sentence: "Whether a card was named" },
  { name: "hasDevice", kind: "yes_no", sentence: "Whether a device was named" },
] as const satisfies readonly FormulaField[];

export type FormulaFieldName = (typeof FORMULA_FIELDS)[number]["name"];
export type FormulaValue = number | boolean | string;

/** A payment as a formula sees it: no prototype, plain values, null where the payment has none. */
export type FormulaScope = Readonly<Record<FormulaFieldName, FormulaValue | null>> & {
  readonly attributes: Readonly<Record<string, FormulaValue>>;
};

/** Of a stored payment, or of one that is about to be. */
export type FormulaPayment = {
  occurredAt: Date;
  amountBaseMinor: number | null;
  currency: string;
  direction: "outgoing" | "incoming";
  channel: Channel;
  remote: boolean | number | null;
  mcc: string | null;
  counterpartyCountry: string | null;
  accountCountry: string | null;
  authentication: string | null;
  accountOpenedAt: Date | null;
  upstreamScore: number | null;
  ruleHits: readonly string[] | null;
  cardRef: string | null;
  deviceId: string | null;
  attributes: Readonly<Record<string, FormulaValue>> | null;
};

const bare = <T extends object>(values: T): T => Object.assign(Object.create(null), values);
const NO_ATTRIBUTES: Readonly<Record<string, FormulaValue>> = Object.freeze(Object.create(null));

export function scopeOf(payment: FormulaPayment): FormulaScope {
  const atMs = payment.occurredAt.getTime();
  const { amountBaseMinor, accountOpenedAt, attributes } = payment;
  return bare({
    amount: amountBaseMinor === null ? null : amountBaseMinor / UNIT_MINOR,
    currency: payment.currency,
    direction: payment.direction,
    channel: payment.channel,
    remote: payment.remote === null ? null : Boolean(payment.remote),
    mcc: payment.mcc,
    counterpartyCountry: payment.counterpartyCountry,
    accountCountry: payment.accountCountry,
    authentication: payment.authentication,
    accountAgeDays: accountOpenedAt === null ? null : (atMs - accountOpenedAt.getTime()) / DAY_MS,
    upstreamScore: payment.upstreamScore,
    ruleHits: payment.ruleHits?.length ?? null,
    hour: hourOf(atMs),
    weekday: ((payment.occurredAt.getUTCDay() + 6) % 7) + 1,
    hasCard: payment.cardRef !== null,
    hasDevice: payment.deviceId !== null,
    // Looked up by names of the sender's, so copied off any prototype.
    attributes: attributes === null ? NO_ATTRIBUTES : bare(attributes),
  });
}
