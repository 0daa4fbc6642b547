import countries from "i18n-iso-countries";
import { z } from "zod";
import { ACTIONS, AUTHENTICATIONS, CHANNELS, DIRECTIONS } from "./codes";

/** `is required` where the field is absent, else what it should be. */
const expecting = (message: string) => ({
  error: (issue: { input?: unknown }) => (issue.input === undefined ? "is required" : message),
});

const text = (longest: number) =>
  z
    .string(expecting("must be text"))
    .min(1, "must not be empty")
    .max(longest, `has more than ${longest} characters`)
    // Lone surrogates would be stored as question marks, and two identifiers become one.
    .regex(/^[^\p{Cc}\p{Cs}]*$/u, "holds control characters or broken text");
const Identifier = text(64);
const oneOf = <const Values extends readonly [string, ...string[]]>(values: Values) =>
  z.enum(values, expecting(`must be one of ${values.join(", ")}`));

/** Kosovo's XK is a user-assigned code, not one of ISO 3166-1. */
const Country = z
  .string(expecting("must be text"))
  .refine((code) => /^[A-Z]{2}$/.test(code) && code !== "XK" && countries.isValid(code), {
    error: "is not a country code of ISO 3166-1 alpha-2, such as FR",
  });
const Time = z.string(expecting("must be a time of RFC 3339, such as 2026-03-01T09:30:00Z"));

const ATTRIBUTES_AT_MOST = 50;
const AttributeValue = z.union([text(200), z.number(), z.boolean()], {
  error: "must be text of at most 200 characters, a number or a boolean",
});

/** Fields that identify something; a source's may be exempted from the search for card numbers. */
const IDENTIFIER_FIELDS = ["externalId", "accountId", "counterpartyId", "cardRef", "deviceId"] as const;

/** One payment as a sender describes it. */
export const TransactionItem = z.strictObject({
  externalId: Identifier.describe("Unique per source"),
  occurredAt: Time.describe("RFC 3339, not more than 24 h in the future"),
  amount: z
    .string(expecting('must be a decimal number as text, such as "129.90"'))
    .describe('Decimal number as text, such as "129.90"; at most 2^53 − 1 minor units'),
  currency: z.string(expecting("must be text")).describe("ISO 4217"),
  channel: oneOf(CHANNELS),
  accountId: Identifier,
  counterpartyId: Identifier,
  direction: oneOf(DIRECTIONS).default("outgoing"),
  remote: z.boolean("must be true or false").optional(),
  counterpartyName: text(140).optional(),
  cardRef: Identifier.optional().describe("A token; never a card number"),
  deviceId: Identifier.optional(),
  ipAddress: z.union([z.ipv4(), z.ipv6()], { error: "must be an IPv4 or IPv6 address" }).optional(),
  mcc: z
    .string(expecting("must be four digits as text"))
    .regex(/^\d{4}$/, "must be four digits as text, such as 0742")
    .optional()
    .describe("ISO 18245"),
  counterpartyCountry: Country.optional().describe("ISO 3166-1 alpha-2"),
  accountCountry: Country.optional().describe("ISO 3166-1 alpha-2"),
  authentication: oneOf(AUTHENTICATIONS).optional(),
  accountOpenedAt: Time.optional(),
  upstreamScore: z
    .number(expecting("must be a number"))
    .min(0, "must lie between 0 and 1")
    .max(1, "must lie between 0 and 1")
    .optional(),
  ruleHits: z.array(text(64), "must be a list of texts").max(20, "has more than 20 entries").optional(),
  attributes: z
    .record(text(64), AttributeValue, "must be an object of numbers, texts and booleans")
    .refine((attributes) => Object.keys(attributes).length <= ATTRIBUTES_AT_MOST, {
      error: `has more than ${ATTRIBUTES_AT_MOST} entries`,
    })
    .optional(),
});
export type TransactionItem = z.output<typeof TransactionItem>;

const { $schema: _, ...itemSchema } = z.toJSONSchema(TransactionItem, { io: "input" });

/** Items are checked one by one, so that a bad one never costs the others; the schema beside is for the document. */
export const TransactionsInput = z.strictObject({
  transactions: z
    .array(z.unknown().meta(itemSchema), "must be a list of transactions")
    .min(1, "needs at least one transaction")
    .max(1_000, "has more than 1000 transactions"),
});
export type TransactionsInput = z.output<typeof TransactionsInput>;

/** What became of one item; null where an item was rejected. */
export const TransactionResult = z.strictObject({
  externalId: z.string().nullable(),
  status: z.enum(["created", "duplicate", "rejected"]),
  transactionId: z.uuid().nullable(),
  action: z.enum(ACTIONS).nullable(),
  probability: z.number().nullable(),
  evidenceDecibans: z.number().nullable(),
  holdExpiresAt: z.iso.datetime().nullable(),
  caseId: z.uuid().nullable(),
  policyVersion: z.int().nullable(),
  scorerVersion: z.int().nullable(),
  errors: z.array(z.strictObject({ path: z.string(), message: z.string() })),
});
export type TransactionResult = z.infer<typeof TransactionResult>;

export const TransactionsView = z.strictObject({ results: z.array(TransactionResult) });
export type TransactionsView = z.infer<typeof TransactionsView>;

/** Identifier fields by source that may hold what looks like a card number. */
export const ExemptFields = z.record(
  z.string().regex(/^[\w.-]{1,64}$/, "must be a source: letters, digits, dots, hyphens or underscores"),
  z.array(z.enum(IDENTIFIER_FIELDS)).max(IDENTIFIER_FIELDS.length),
);
export type ExemptFields = z.infer<typeof ExemptFields>;

export const ExemptFieldsView = z.strictObject({ exemptIdentifierFields: ExemptFields });
export type ExemptFieldsView = z.infer<typeof ExemptFieldsView>;
