import { z } from "zod";
import { CHANNELS } from "../transactions/codes";
import { AT_EXPIRY, MATURED_UNLABELLED, ON_HOLD, ORDERS, POLICY_STATES } from "./codes";
import { termsFaults } from "./consistency";

const Probability = z.number().min(0).max(1);
/** Neither 0 nor 1: a line lies somewhere on the axis of evidence. */
const LineProbability = z.number().min(1e-6).max(0.999999);
const Minor = z.number().int().min(0).max(Number.MAX_SAFE_INTEGER);
const Minutes = z
  .number()
  .int()
  .min(1)
  .max(60 * 24 * 60);

/** What a channel can still do with a payment in the hold zone. */
export const ChannelRule = z.strictObject({
  onHold: z.enum(ON_HOLD),
  holdMinutes: Minutes,
  atExpiry: z.enum(AT_EXPIRY),
});

export const PolicyTerms = z.strictObject({
  reviewThreshold: z.discriminatedUnion("kind", [
    z.strictObject({ kind: z.literal("fixed"), probability: LineProbability }),
    z.strictObject({ kind: z.literal("capacity"), casesPerDay: z.number().int().min(1).max(1_000_000) }),
  ]),
  holdThreshold: LineProbability,
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
  /** What passed payments that nobody labelled teach after those days; `legitimate` learns a random few of them a day. */
  maturedUnlabelled: z.enum(MATURED_UNLABELLED),
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

/** Terms as stored: the record of an older version lacks what came later, and reads as what held then. */
export function readStoredTerms(stored: string): PolicyTerms {
  return { maturedUnlabelled: "ignored", ...JSON.parse(stored) };
}

const Id = z.uuid();
const Instant = z.iso.datetime();
const PersonRef = z.strictObject({ id: Id, name: z.string() });

/** Terms whose fields also go together; each fault is named by the field to change. */
const ConsistentTerms = PolicyTerms.superRefine((terms, context) => {
  for (const { path, message } of termsFaults(terms)) {
    context.addIssue({ code: "custom", path: path.split("."), message });
  }
});

const Reason = z.string().trim().min(1, "needs a reason").max(2000);

export const ProposeInput = z.strictObject({
  terms: ConsistentTerms,
  reason: Reason,
  /** The newest approved version, whose terms the proposer had before them. */
  basedOnVersion: z.int().min(1),
});
export type ProposeInput = z.infer<typeof ProposeInput>;

export const ApproveInput = z.strictObject({
  id: Id,
  /** Moment from which it is in force; at once where it is left out. */
  effectiveAt: Instant.nullable().default(null),
});
export type ApproveInput = z.infer<typeof ApproveInput>;

export const DeclineInput = z.strictObject({ id: Id, reason: Reason });
export type DeclineInput = z.infer<typeof DeclineInput>;

export const WithdrawInput = z.strictObject({ id: Id });
export type WithdrawInput = z.infer<typeof WithdrawInput>;

/** One proposal, or the version that it became. People are null where the system acted. */
export const PolicyRecord = z.strictObject({
  policyId: Id,
  version: z.int().nullable(),
  state: z.enum(POLICY_STATES),
  terms: PolicyTerms,
  basedOnVersion: z.int().nullable(),
  reason: z.string(),
  proposedBy: PersonRef.nullable(),
  proposedAt: Instant,
  settledBy: PersonRef.nullable(),
  settledAt: Instant.nullable(),
  /** Why it was declined. */
  refusalReason: z.string().nullable(),
  effectiveAt: Instant.nullable(),
});
export type PolicyRecord = z.infer<typeof PolicyRecord>;

/** Recent arrival scores counted by evidence: bin i holds [i, i + 1) · binDecibans. */
export const ScoreHistogram = z.strictObject({
  count: z.int(),
  days: z.number(),
  binDecibans: z.number(),
  bins: z.array(z.strictObject({ bin: z.int(), count: z.int() })),
});
export type ScoreHistogram = z.infer<typeof ScoreHistogram>;

export const PolicyView = z.strictObject({
  inForce: PolicyRecord,
  /** Where the two lines lie now, in decibans. */
  reviewDecibans: z.number(),
  holdDecibans: z.number(),
  /** Proposals that wait for a second person, oldest first. */
  pending: z.array(PolicyRecord),
  /** Everything that was settled, newest first; the first hundred. */
  history: z.array(PolicyRecord),
  /** Version a new proposal starts from: the newest approved, in force or about to be. */
  newestVersion: z.int(),
  recent: ScoreHistogram,
  /** Costs are in minor units of it. */
  baseCurrency: z.strictObject({ code: z.string(), minorDigits: z.int() }),
});
export type PolicyView = z.infer<typeof PolicyView>;
