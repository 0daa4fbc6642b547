import { z } from "zod";
import { BEARERS, OUTCOME_KINDS, OUTCOME_STAGES, REASON_FAMILIES } from "./codes";

/** `is required` where the field is absent, else what it should be. */
const expecting = (message: string) => ({
  error: (issue: { input?: unknown }) => (issue.input === undefined ? "is required" : message),
});
const oneOf = <const Values extends readonly [string, ...string[]]>(values: Values) =>
  z.enum(values, expecting(`must be one of ${values.join(", ")}`));
const Reference = z
  .string(expecting("must be text"))
  .min(1, "must not be empty")
  .max(64, "has more than 64 characters")
  .regex(/^[^\p{Cc}\p{Cs}]*$/u, "holds control characters or broken text");

/** What became of a payment, as a sender describes it. */
export const OutcomeItem = z.strictObject({
  externalId: Reference.describe("The payment's identifier; of the sender's own source first, else of any"),
  kind: oneOf(OUTCOME_KINDS),
  reasonFamily: oneOf(REASON_FAMILIES).optional().describe("Only fraud reasons label a payment"),
  stage: oneOf(OUTCOME_STAGES).optional().describe("A dispute won or withdrawn moves money, not the label"),
  bearer: oneOf(BEARERS).optional().describe("Who bears the loss"),
  occurredAt: z
    .string(expecting("must be a time of RFC 3339, such as 2026-03-01T09:30:00Z"))
    .describe("RFC 3339"),
  amount: z
    .string(expecting('must be a decimal number as text, such as "129.90"'))
    .optional()
    .describe("Needed for a recovery; else the whole payment is meant"),
  currency: z.string(expecting("must be text")).optional().describe("ISO 4217, with amount"),
  reference: Reference.optional().describe("Tells two outcomes apart that are alike in all else"),
});
export type OutcomeItem = z.output<typeof OutcomeItem>;

const { $schema: _, ...itemSchema } = z.toJSONSchema(OutcomeItem, { io: "input" });

/** Items are checked one by one, so that a bad one never costs the others; the schema beside is for the document. */
export const OutcomesInput = z.strictObject({
  outcomes: z
    .array(z.unknown().meta(itemSchema), "must be a list of outcomes")
    .min(1, "needs at least one outcome")
    .max(1_000, "has more than 1000 outcomes"),
});
export type OutcomesInput = z.output<typeof OutcomesInput>;

export const OutcomeResult = z.strictObject({
  externalId: z.string().nullable(),
  status: z.enum(["created", "duplicate", "rejected"]),
  outcomeId: z.uuid().nullable(),
  transactionId: z.uuid().nullable(),
  /** False while it is kept for a payment that has not arrived. */
  applied: z.boolean(),
  errors: z.array(z.strictObject({ path: z.string(), message: z.string() })),
});
export type OutcomeResult = z.infer<typeof OutcomeResult>;

export const OutcomesView = z.strictObject({ results: z.array(OutcomeResult) });
export type OutcomesView = z.infer<typeof OutcomesView>;
