import { z } from "zod";
import { TYPOLOGIES } from "../decisions/codes";
import { CHANNELS } from "../transactions/codes";
import { isWeek } from "./iso-week";

const Id = z.uuid();
const Instant = z.iso.datetime();
/** Signed decimal string in the base currency. */
const Money = z.string();
const Count = z.int();
/** Null means "not defined": nothing to divide by. */
const Ratio = z.number().nullable();

export const Week = z
  .string()
  .refine(isWeek, "is not an ISO week such as 2026-W48")
  .meta({ description: "ISO 8601 week, 2026-W48" });

export const LossesInput = z.strictObject({
  /** The last complete week where none is named. */
  week: Week.optional(),
  by: z.enum(["transaction", "booking"]).default("transaction"),
});
export type LossesInput = z.infer<typeof LossesInput>;

const amounts = {
  attempted: Money,
  prevented: Money,
  gross: Money,
  missed: Money,
  recovered: Money,
  net: Money,
  falsePositive: Money,
  lostMargin: Money,
  reviewCost: Money,
  totalCost: Money,
};

export const WeekTotalsView = z.strictObject({
  ...amounts,
  /** Value of the payments that went through, the denominator of the rates. */
  settled: Money,
  payments: Count,
  /** Payments whose currency has no rate: they are in no amount. */
  unpriced: Count,
  fraudulent: Count,
  legitimate: Count,
  customerMisuse: Count,
  /** Prevented ÷ attempted, a share. */
  valueDetection: Ratio,
  /** Gross, net and total cost ÷ settled value, in basis points. */
  fraudRateBp: Ratio,
  netRateBp: Ratio,
  totalCostBp: Ratio,
  /** Fraudulent among the alerts decided, with its 95 % interval. */
  precision: z
    .strictObject({ share: z.number(), low: z.number(), high: z.number(), count: Count, of: Count })
    .nullable(),
  costPerCase: Money.nullable(),
});
export type WeekTotalsView = z.infer<typeof WeekTotalsView>;

export const WeekView = z.strictObject({
  week: z.string(),
  by: z.enum(["transaction", "booking"]),
  timeZone: z.string(),
  from: Instant,
  until: Instant,
  currency: z.string(),
  maturity: z.strictObject({ state: z.enum(["running", "immature", "mature"]), maturesAt: Instant }),
  totals: WeekTotalsView,
  /** The week before as it was known at the same age, and the change from it. */
  previous: z.strictObject({ week: z.string(), totals: WeekTotalsView }),
  change: z.strictObject(amounts),
  workload: z.strictObject({ opened: Count, decided: Count, waiting: Count, overdue: Count, lapsed: Count }),
  largest: z.array(
    z.strictObject({
      caseId: Id.nullable(),
      number: Count.nullable(),
      transactionId: Id,
      externalId: z.string(),
      channel: z.enum(CHANNELS),
      attempted: Money,
      prevented: Money,
    }),
  ),
  typologies: z.array(
    z.strictObject({ typology: z.enum(TYPOLOGIES), findings: Count, attempted: Money, prevented: Money }),
  ),
});
export type WeekView = z.infer<typeof WeekView>;
