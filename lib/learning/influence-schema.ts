import { z } from "zod";

const Id = z.uuid();
const Instant = z.iso.datetime();

/** What the scorer in use would be like without some labels, compared with what it is. */
export const ScorerEffect = z.strictObject({
  /** Euclidean length of the difference between the weights. */
  weightDistance: z.number(),
  /** Mean of |change| over the payments looked at, in decibans; null where there are none. */
  meanDecibans: z.number().nullable(),
  largestDecibans: z.number().nullable(),
  /** The three signals whose weights differ most, the farthest first; fewer where fewer differ. */
  signals: z.array(
    z.strictObject({
      key: z.string(),
      name: z.string(),
      /** Euclidean length of the difference over the signal's coordinates. */
      distance: z.number(),
    }),
  ),
});
export type ScorerEffect = z.infer<typeof ScorerEffect>;

/** Payments whose scores are compared: the newest that wait, or where none waits the newest at all. */
export const PaymentsLookedAt = z.strictObject({ of: z.enum(["waiting", "newest"]), count: z.int() });
export type PaymentsLookedAt = z.infer<typeof PaymentsLookedAt>;

/** 95 % interval of Wilson; null in its place where nothing was labelled. */
const Share = z.strictObject({
  value: z.number(),
  count: z.int(),
  n: z.int(),
  low: z.number(),
  high: z.number(),
});

export const PersonInfluence = z.strictObject({
  person: z.strictObject({ id: Id, name: z.string() }),
  /** Labels of theirs in force. */
  labels: z.int(),
  fraudulent: z.int(),
  /** When the oldest and the newest of them were given. */
  firstAt: Instant.nullable(),
  lastAt: Instant.nullable(),
  /** Of the labels they gave and did not take back: those that another person later corrected. */
  corrected: Share.nullable(),
  /** As above, but overturned by an outcome. */
  overturned: Share.nullable(),
  /** The log without their labels; null while that has not been reckoned, or where they have none. */
  effect: ScorerEffect.nullable(),
});
export type PersonInfluence = z.infer<typeof PersonInfluence>;

/** What a reckoning found, as it is kept: without names. */
export const InfluenceResult = z.strictObject({
  payments: PaymentsLookedAt,
  people: z.array(PersonInfluence.omit({ person: true }).extend({ personId: Id })),
});
export type InfluenceResult = z.infer<typeof InfluenceResult>;

export const InfluenceView = z.strictObject({
  /** `pending`: effects are being reckoned for the log as it is now; those shown, if any, are for `asOfSeq`. */
  state: z.enum(["ready", "pending"]),
  /** Last row of the label log, and the one that the effects below take in; null before the first reckoning. */
  logSeq: z.int(),
  asOfSeq: z.int().nullable(),
  computedAt: Instant.nullable(),
  payments: PaymentsLookedAt.nullable(),
  /** How far one label can move the weights at most, whoever gives it. */
  bound: z.strictObject({
    distance: z.number(),
    /** Where that comes from, for those who want to check it. */
    formula: z.string(),
  }),
  /** Weights as they are: their length and the most it can be. */
  weights: z.strictObject({ length: z.number(), bound: z.number() }),
  /** Those with most labels first. */
  people: z.array(PersonInfluence),
});
export type InfluenceView = z.infer<typeof InfluenceView>;

export const InfluenceInput = z.strictObject({});
export type InfluenceInput = z.infer<typeof InfluenceInput>;

const span = {
  personId: Id,
  /** Labels given at or after this moment. */
  from: Instant.optional(),
  /** Labels given before this moment. */
  to: Instant.optional(),
};

export const RemovalPreviewInput = z.strictObject(span);
export type RemovalPreviewInput = z.infer<typeof RemovalPreviewInput>;

/** What a removal would do if it were carried out now. */
export const RemovalPreview = z.strictObject({
  person: z.strictObject({ id: Id, name: z.string() }),
  from: Instant.nullable(),
  to: Instant.nullable(),
  /** Labels that would go. */
  labels: z.int(),
  /** Among them those in whose place another person's earlier label would hold again. */
  givenBack: z.int(),
  logSeq: z.int(),
  payments: PaymentsLookedAt,
  /** Null where no label would go. */
  effect: ScorerEffect.nullable(),
});
export type RemovalPreview = z.infer<typeof RemovalPreview>;

/** Proposes it; a second person approves it among the approvals (kind labels.remove). Answers the approval. */
export const RemovalInput = z.strictObject({
  ...span,
  reason: z.string().trim().min(1, "needs a reason").max(2000),
});
export type RemovalInput = z.infer<typeof RemovalInput>;
