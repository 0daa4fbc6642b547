import { createHash } from "node:crypto";
import type { FieldError } from "../errors";
import { fieldErrors } from "../field-errors";
import { minorDigits, parseAmount } from "../money";
import { findCardNumbers } from "../transactions/card-number";
import { parseInstant } from "../transactions/instant";
import type { BEARERS, OUTCOME_KINDS, OUTCOME_STAGES, REASON_FAMILIES } from "./codes";
import { OutcomeItem } from "./schema";

const FUTURE_MS = 24 * 3_600_000;

/** An outcome that may come in, in our own terms. */
export type Outcome = {
  externalId: string;
  kind: (typeof OUTCOME_KINDS)[number];
  reasonFamily: (typeof REASON_FAMILIES)[number] | null;
  stage: (typeof OUTCOME_STAGES)[number] | null;
  bearer: (typeof BEARERS)[number] | null;
  occurredAt: Date;
  amountMinor: number | null;
  currency: string | null;
  reference: string | null;
};

export type ReadOutcome =
  | { outcome: Outcome; contentHash: Buffer }
  | { externalId: string | null; errors: FieldError[] };

/** Checks one item as it was sent. Messages and paths never repeat a value. */
export function readOutcome(
  raw: unknown,
  source: string,
  now: Date,
  exempt: ReadonlySet<string>,
): ReadOutcome {
  const withCard = findCardNumbers(raw, exempt);
  if (withCard.length > 0) {
    const message = "holds what looks like a payment card number; send a reference in its place";
    return { externalId: null, errors: withCard.map((path) => ({ path, message })) };
  }
  const parsed = OutcomeItem.safeParse(raw);
  if (!parsed.success) return { externalId: null, errors: fieldErrors(parsed.error) };
  const { amount, currency, occurredAt: time, ...item } = parsed.data;
  const errors: FieldError[] = [];
  const atMs = parseInstant(time);
  if (atMs === null) {
    errors.push({
      path: "occurredAt",
      message: "is not a time of RFC 3339, such as 2026-03-01T09:30:00Z",
    });
  } else if (atMs > now.getTime() + FUTURE_MS) {
    errors.push({ path: "occurredAt", message: "lies more than 24 h in the future" });
  }
  const money = readMoney(amount, currency);
  if ("path" in money) errors.push(money);
  else if (item.kind === "recovery" && money.amountMinor === null) {
    errors.push({ path: "amount", message: "is required for a recovery" });
  }
  if (errors.length > 0 || atMs === null || "path" in money) return { externalId: item.externalId, errors };
  const outcome: Outcome = {
    externalId: item.externalId,
    kind: item.kind,
    reasonFamily: item.reasonFamily ?? null,
    stage: item.stage ?? null,
    bearer: item.bearer ?? null,
    occurredAt: new Date(atMs),
    ...money,
    reference: item.reference ?? null,
  };
  return { outcome, contentHash: hashOf(source, outcome) };
}

type Money = Pick<Outcome, "amountMinor" | "currency">;

function readMoney(amount: string | undefined, currency: string | undefined): Money | FieldError {
  if (amount === undefined && currency === undefined) return { amountMinor: null, currency: null };
  if (currency === undefined) return { path: "currency", message: "is required with an amount" };
  if (amount === undefined) return { path: "amount", message: "is required with a currency" };
  const digits = minorDigits(currency);
  if (digits === null)
    return { path: "currency", message: "is not a currency of ISO 4217 that has a minor unit" };
  const amountMinor = parseAmount(amount, currency);
  if (amountMinor === null) {
    return {
      path: "amount",
      message: `is not a decimal number of 0 or more with at most ${digits} decimal places`,
    };
  }
  return { amountMinor, currency };
}

/** The same identifier in two sources names two payments, so that the source is part of the content. */
function hashOf(source: string, outcome: Outcome): Buffer {
  return createHash("sha256")
    .update(JSON.stringify([source, ...Object.values(outcome)]))
    .digest();
}
