import { z } from "zod";
import { METHODS } from "../scorer";
import { SCORER_ROLES } from "./codes";

const Id = z.uuid();
const Instant = z.iso.datetime();

/** A figure with its 95 % interval; null in its place where it is not defined, never 0. */
export const Estimate = z.strictObject({
  value: z.number(),
  /** Labelled payments it is taken over. */
  n: z.int(),
  /** How many of them are fraudulent. */
  positives: z.int(),
  low: z.number(),
  high: z.number(),
  /** How the interval is made. */
  method: z.string(),
});
export type Estimate = z.infer<typeof Estimate>;

/** A scorer's options with every default filled in; null for what its method does not have. */
export const ScorerOptionsView = z.strictObject({
  weightBound: z.number(),
  featureBound: z.number(),
  marginBound: z.number().nullable(),
  regularization: z.number().nullable(),
  outcomeWeight: z.number().nullable(),
  forgetting: z.number().nullable(),
  /** Log-odds of the base rate, in nats. */
  offset: z.number(),
});
export type ScorerOptionsView = z.infer<typeof ScorerOptionsView>;

/** One step of the reliability curve: predictions from `from` up to `to`, and how much fraud there was among them. */
export const CalibrationBin = z.strictObject({
  from: z.number(),
  to: z.number(),
  meanPredicted: z.number(),
  observed: z.number(),
  n: z.int(),
  low: z.number(),
  high: z.number(),
});
export type CalibrationBin = z.infer<typeof CalibrationBin>;

export const ScorerFigures = z.strictObject({
  id: Id,
  name: z.string(),
  method: z.enum(METHODS),
  role: z.enum(SCORER_ROLES),
  options: ScorerOptionsView,
  startedAt: Instant,
  /** Row of the label log at which it was made: what it predicted up to there was reckoned afterwards. */
  startedSeq: z.int(),
  /** Labels in force that its state was learned from. */
  labels: z.int(),
  /** Rows of the label log that a candidate has not taken in yet. */
  behind: z.int(),
  /** Labels of the window that it has predicted; the figures below are over these. */
  predicted: z.int(),
  /** How many of them it predicted as they came, and not afterwards. */
  livedPredicted: z.int(),
  /** Sum in nats over every label of the window, as predicted before it and as it came, matured ones included. */
  cumulativeLoss: z.number(),
  meanLoss: z.number().nullable(),
  /** Upper bound on its regret since the first label, in nats, where the method has one. */
  certificate: z.number().nullable(),
  /** Since the first label: loss beyond that of the best fixed weights within the bound. */
  regret: z
    .strictObject({ value: z.number(), hindsightLoss: z.number(), asOfSeq: z.int(), labels: z.int() })
    .nullable(),
  brier: Estimate.nullable(),
  auc: Estimate.nullable(),
  averagePrecision: Estimate.nullable(),
  precisionAtCapacity: Estimate.nullable().describe(
    "Share of fraud among each day's highest scores, as many as the team decides in a day; over payments that were reviewed only",
  ),
  spiegelhalterZ: z.strictObject({ z: z.number(), p: z.number() }).nullable(),
  calibration: z.array(CalibrationBin),
});
export type ScorerFigures = z.infer<typeof ScorerFigures>;

export const CurvePoint = z.strictObject({
  seq: z.int(),
  at: Instant,
  /** Cumulative loss in nats from the window's start up to here, by scorer; left out where it is not that far yet. */
  losses: z.record(Id, z.number()),
  /** Loss of the best fixed weights for the labels up to here; given where it is known and the window starts at the first label. */
  hindsight: z.number().nullable(),
});
export type CurvePoint = z.infer<typeof CurvePoint>;

export const LearningView = z.strictObject({
  window: z.strictObject({
    from: Instant.nullable(),
    to: Instant.nullable(),
    /** Labels in force of the window's rows, those left out that matured by themselves. */
    labels: z.int(),
    fraudulent: z.int(),
    fromSeq: z.int(),
    toSeq: z.int(),
    /** Labels older than the window that were left out, because no more than the newest are judged at once. */
    leftOut: z.int(),
  }),
  capacityPerDay: z.int(),
  /** The scorer in use first, then the candidates by age. */
  scorers: z.array(ScorerFigures),
  curve: z.array(CurvePoint),
  /** The newest fit for the scorer in use. */
  hindsight: z
    .strictObject({
      labels: z.int(),
      loss: z.number(),
      weightBound: z.number(),
      asOfSeq: z.int(),
      computedAt: Instant,
    })
    .nullable(),
});
export type LearningView = z.infer<typeof LearningView>;

export const LearningInput = z.strictObject({
  from: Instant.optional(),
  to: Instant.optional(),
});
export type LearningInput = z.infer<typeof LearningInput>;

/** What is left out takes the method's default. */
export const CandidateInput = z.strictObject({
  name: z.string().trim().min(1, "needs a name").max(80),
  method: z.enum(METHODS),
  options: z
    .strictObject({
      weightBound: z.number().optional(),
      featureBound: z.number().optional(),
      marginBound: z.number().optional(),
      regularization: z.number().optional(),
      outcomeWeight: z.number().optional(),
      forgetting: z.number().optional(),
    })
    .default({}),
});
export type CandidateInput = z.infer<typeof CandidateInput>;

export const CandidateView = z.strictObject({
  id: Id,
  name: z.string(),
  method: z.enum(METHODS),
  role: z.enum(SCORER_ROLES),
  options: ScorerOptionsView,
  startedAt: Instant,
  startedSeq: z.int(),
});
export type CandidateView = z.infer<typeof CandidateView>;

export const DropInput = z.strictObject({ id: Id });
export type DropInput = z.infer<typeof DropInput>;

export const PromotionInput = z.strictObject({
  id: Id,
  reason: z.string().trim().min(1, "needs a reason").max(2000),
});
export type PromotionInput = z.infer<typeof PromotionInput>;
