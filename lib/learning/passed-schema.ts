import { z } from "zod";

/** An estimate for all passed payments of the days, from those that were drawn and decided. */
export const PassedEstimate = z.strictObject({
  value: z.number(),
  /** 95 %. */
  low: z.number(),
  high: z.number(),
});

export const PassedView = z.strictObject({
  /** Days in UTC on which the payments happened, both included. */
  from: z.iso.date(),
  to: z.iso.date(),
  /** Payments below the review threshold on those days. */
  passed: z.int(),
  drawn: z.int(),
  decided: z.int(),
  waiting: z.int(),
  /** Drawn, and closed without a verdict. */
  lapsed: z.int(),
  /** Drawn and decided fraudulent. */
  foundFraudulent: z.int(),
  /** Null where there is nothing to estimate from; the reason says why. */
  estimate: z
    .strictObject({
      fraudulent: PassedEstimate,
      /** In 1,000 passed payments. */
      perThousand: PassedEstimate,
      /** Minor units of the base currency. */
      valueMinor: PassedEstimate,
      /** Decided draws whose value is not known in the base currency: in the number, not in the value. */
      unpriced: z.int(),
      /** Passed payments that the draws stand for; near `passed` where drawing covered all days. */
      standsFor: z.number(),
    })
    .nullable(),
  reason: z.enum(["nothing_passed", "nothing_drawn", "nothing_decided"]).nullable(),
  /** Reported by others on passed payments of those days, whether drawn or not: shown beside, not mixed in. */
  reported: z.strictObject({ fraudulent: z.int(), valueMinor: z.int() }),
  baseCurrency: z.strictObject({ code: z.string(), minorDigits: z.int() }),
});
export type PassedView = z.infer<typeof PassedView>;

/** The last four weeks where left out. */
export const PassedInput = z
  .strictObject({ from: z.iso.date().optional(), to: z.iso.date().optional() })
  .refine(({ from, to }) => !from || !to || from <= to, { path: ["from"], message: "must not be after to" });
export type PassedInput = z.infer<typeof PassedInput>;
