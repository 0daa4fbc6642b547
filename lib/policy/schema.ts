import { z } from "zod";
import { CHANNELS } from "../transactions/codes";
import { ORDERS } from "./codes";

const Probability = z.number().min(0).max(1);
const Minor = z.number().int().min(0).max(Number.MAX_SAFE_INTEGER);
const Minutes = z
  .number()
  .int()
  .min(1)
  .max(60 * 24 * 60);

/** What a channel can still do with a payment in the hold zone. */
export const ChannelRule = z.strictObject({
  onHold: z.enum(["hold", "refuse", "let_go"]),
  holdMinutes: Minutes,
  atExpiry: z.enum(["release", "refuse"]),
});

export const PolicyTerms = z.strictObject({
  reviewThreshold: z.discriminatedUnion("kind", [
    z.strictObject({ kind: z.literal("fixed"), probability: Probability }),
    z.strictObject({ kind: z.literal("capacity"), casesPerDay: z.number().int().min(1).max(1_000_000) }),
  ]),
  holdThreshold: Probability,
  /** Prior probability of fraud that an untrained scorer starts from. */
  baseRate: z.number().min(1e-6).max(0.5),
  order: z.enum(ORDERS),
  /** Share of the daily capacity spent on randomly drawn passed payments. */
  sampleShare: z.number().min(0).max(0.2),
  secondReviewShare: z.number().min(0).max(1),
  /** Every k-th case handed out is an overdue one, every m-th a sample, where there are any. */
  overdueEvery: z.number().int().min(2).max(100),
  sampleEvery: z.number().int().min(2).max(100),
  dailyCapacity: z.number().int().min(1).max(1_000_000),
  deadlineMinutes: z.strictObject({ review: Minutes, hold: Minutes, sample: Minutes }),
  /** A hold this close to its expiry comes first in every order. */
  expiringMinutes: Minutes,
  /** An alert without a hold that nobody reached closes unlabelled after this long. */
  lifetimeDays: z.number().int().min(1).max(365),
  reviewCostMinorPerHour: Minor,
  falsePositiveCostMinor: Minor,
  lossGivenFraud: Probability,
  lostMargin: Probability,
  undoMinutes: z
    .number()
    .int()
    .min(1)
    .max(24 * 60),
  secondReviewWindowDays: z.number().int().min(1).max(90),
  maturityDays: z.strictObject({
    cards: z.number().int().min(1).max(400),
    other: z.number().int().min(1).max(400),
  }),
  hideScoreUntilVerdict: z.boolean(),
  takeNextOnly: z.boolean(),
  channels: z.strictObject(
    Object.fromEntries(CHANNELS.map((channel) => [channel, ChannelRule])) as Record<
      (typeof CHANNELS)[number],
      typeof ChannelRule
    >,
  ),
});
export type PolicyTerms = z.infer<typeof PolicyTerms>;
