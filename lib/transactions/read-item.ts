import { createHash } from "node:crypto";
import type { FieldError } from "../errors";
import { fieldErrors } from "../field-errors";
import { minorDigits, parseAmount } from "../money";
import { findCardNumbers } from "./card-number";
import type { Channel } from "./codes";
import { parseInstant } from "./instant";
import { TransactionItem } from "./schema";

const FUTURE_MS = 24 * 3_600_000;
/** Earlier years are typing errors, and not every part of the system can hold them. */
const EARLIEST_MS = Date.UTC(1900, 0, 1);

/** A payment that may come in, in our own terms. */
export type Payment = {
  externalId: string;
  /** SHA-256 over the content, however it was written: "129.9" and "129.90" are the same amount. */
  contentHash: Buffer;
  occurredAt: Date;
  amountMinor: number;
  currency: string;
  direction: "outgoing" | "incoming";
  channel: Channel;
  remote: boolean | null;
  accountId: string;
  counterpartyId: string;
  counterpartyName: string | null;
  cardRef: string | null;
  deviceId: string | null;
  ipAddress: string | null;
  mcc: string | null;
  counterpartyCountry: string | null;
  accountCountry: string | null;
  authentication: "strong" | "single" | "none" | "exempt" | null;
  accountOpenedAt: Date | null;
  upstreamScore: number | null;
  ruleHits: string[] | null;
  attributes: Record<string, string | number | boolean> | null;
};

export type ReadItem = { payment: Payment } | { externalId: string | null; errors: FieldError[] };

/** Checks one item as it was sent. Messages and paths never repeat a value. */
export function readItem(raw: unknown, now: Date, exempt: ReadonlySet<string>): ReadItem {
  const withCard = findCardNumbers(raw, exempt);
  if (withCard.length > 0) {
    const message = "holds what looks like a payment card number; send a token in its place";
    const externalId = withCard.includes("externalId") || withCard.includes("") ? null : externalIdOf(raw);
    return { externalId, errors: withCard.map((path) => ({ path, message })) };
  }
  const parsed = TransactionItem.safeParse(raw);
  if (!parsed.success) return { externalId: externalIdOf(raw), errors: fieldErrors(parsed.error) };
  const item = parsed.data;
  const errors: FieldError[] = [];
  const time = (path: "occurredAt" | "accountOpenedAt", text: string) => {
    const atMs = parseInstant(text);
    const fault = faultOfTime(atMs, now);
    if (fault) errors.push({ path, message: fault });
    return new Date(atMs ?? 0);
  };
  const amount = readAmount(item.amount, item.currency);
  if ("path" in amount) errors.push(amount);
  const occurredAt = time("occurredAt", item.occurredAt);
  const accountOpenedAt =
    item.accountOpenedAt === undefined ? null : time("accountOpenedAt", item.accountOpenedAt);
  if (errors.length > 0 || "path" in amount) return { externalId: item.externalId, errors };
  const content = {
    externalId: item.externalId,
    occurredAt,
    amountMinor: amount.minor,
    currency: item.currency,
    direction: item.direction,
    channel: item.channel,
    remote: item.remote ?? null,
    accountId: item.accountId,
    counterpartyId: item.counterpartyId,
    counterpartyName: item.counterpartyName ?? null,
    cardRef: item.cardRef ?? null,
    deviceId: item.deviceId ?? null,
    ipAddress: item.ipAddress ?? null,
    mcc: item.mcc ?? null,
    counterpartyCountry: item.counterpartyCountry ?? null,
    accountCountry: item.accountCountry ?? null,
    authentication: item.authentication ?? null,
    accountOpenedAt,
    upstreamScore: item.upstreamScore ?? null,
    ruleHits: item.ruleHits ?? null,
    attributes: item.attributes ?? null,
  };
  return { payment: { ...content, contentHash: hashOf(content) } };
}

function faultOfTime(atMs: number | null, now: Date): string | null {
  if (atMs === null) return "is not a time of RFC 3339, such as 2026-03-01T09:30:00Z";
  if (atMs > now.getTime() + FUTURE_MS) return "lies more than 24 h in the future";
  return atMs < EARLIEST_MS ? "lies before the year 1900" : null;
}

function readAmount(text: string, currency: string): { minor: number } | FieldError {
  const digits = minorDigits(currency);
  if (digits === null)
    return { path: "currency", message: "is not a currency of ISO 4217 that has a minor unit" };
  const minor = parseAmount(text, currency);
  if (minor !== null) return { minor };
  const [, whole, fraction = ""] = /^(\d+)(?:\.(\d+))?$/.exec(text) ?? [];
  const message =
    whole === undefined
      ? 'is not a decimal number of 0 or more, such as "129.90"'
      : fraction.length > digits
        ? `has more decimal places than ${currency}, which has ${digits}`
        : "is larger than 2^53 − 1 minor units";
  return { path: "amount", message };
}

/** The fields come in a fixed order, and attributes by name, so that the order of sending makes no difference. */
function hashOf({ attributes, ...fields }: Omit<Payment, "contentHash">): Buffer {
  const byName = attributes && Object.entries(attributes).sort(([a], [b]) => (a < b ? -1 : 1));
  return createHash("sha256")
    .update(JSON.stringify([Object.values(fields), byName]))
    .digest();
}

/** For the answer to a rejected item, where the identifier itself is sound. */
function externalIdOf(raw: unknown): string | null {
  const value = typeof raw === "object" && raw !== null && "externalId" in raw ? raw.externalId : null;
  const parsed = TransactionItem.shape.externalId.safeParse(value);
  return parsed.success ? parsed.data : null;
}
