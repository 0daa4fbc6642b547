import { z } from "zod";
import { CASE_KINDS } from "../cases/codes";
import { Amount, DecisionView, EvidenceView, Id, Instant, WithoutSignal } from "../cases/schema";
import { DECISION_KINDS } from "../decisions/codes";
import { ZONES } from "../policy/codes";
import { PolicyRecord } from "../policy/schema";
import { TrailEntryView } from "../trail/schema";
import { CHANNELS } from "../transactions/codes";

export const DecisionRecordInput = z.strictObject({ id: Id });
export type DecisionRecordInput = z.infer<typeof DecisionRecordInput>;

/** One decision as it was when it was made. */
export const DecisionRecordView = z.strictObject({
  decision: DecisionView,
  case: z.strictObject({ id: Id, number: z.int(), kind: z.enum(CASE_KINDS), zone: z.enum(ZONES) }),
  /** The key that sent it, where one acted for the person. */
  byKey: z.string().nullable(),
  transaction: z.strictObject({
    id: Id,
    source: z.string(),
    externalId: z.string(),
    occurredAt: Instant,
    amount: Amount,
    currency: z.string(),
    channel: z.enum(CHANNELS),
  }),
  handlingSeconds: z.int(),
  /** The score was hidden until the verdict was given. */
  scoreWasHidden: z.boolean(),
  /** What was shown, from the numbers kept with the decision. */
  evidence: EvidenceView,
  scorerVersionAfter: z.int(),
  /** Whether the scorer of that version, folded anew from the label log, gives the kept numbers bit for bit. */
  rederivedEqual: z.boolean(),
  policy: PolicyRecord,
  /** All that the trail says about the case, oldest first. */
  entries: z.array(TrailEntryView),
});
export type DecisionRecordView = z.infer<typeof DecisionRecordView>;

/** Which scorer gave a score. */
const ScorerOfVersion = z.strictObject({ name: z.string(), version: z.int() });

const SCORE_KINDS = ["arrival", "refresh", "decision"] as const;

export const ScoresInput = z.strictObject({ id: Id });
export type ScoresInput = z.infer<typeof ScoresInput>;

/** Every score that a case's payment was given, oldest first. */
export const ScoresView = z.strictObject({
  /** The policy hides scores until the verdict: nothing is listed. */
  hidden: z.boolean(),
  /** Older than those listed, which are the newest. */
  leftOut: z.int(),
  items: z.array(
    z.strictObject({
      /** Of a score its number, of what was shown with a verdict the decision's id. */
      scoreId: z.string(),
      /** Taken at arrival, taken anew because a linked payment was labelled, or shown with a verdict. */
      kind: z.enum(SCORE_KINDS),
      at: Instant,
      /** Whose verdict, and which kind; null for the others. */
      decision: z.strictObject({ kind: z.enum(DECISION_KINDS), by: z.string() }).nullable(),
      /** Null where no scorer ever had the version that the record names. */
      scorer: ScorerOfVersion.nullable(),
      policyVersion: z.int(),
      totalDecibans: z.number(),
      probability: z.number(),
      /** Whether the asker may have it derived again. */
      derivable: z.boolean(),
    }),
  ),
});
export type ScoresView = z.infer<typeof ScoresView>;

export const DerivationInput = z.strictObject({
  id: Id,
  scoreId: z.union([z.string().regex(/^[1-9]\d{0,14}$/, "is a score's number or a decision's id"), Id]),
});
export type DerivationInput = z.infer<typeof DerivationInput>;

/** A score of the past beside the one that the scorer of its version gives, folded anew from the label log. */
export const DerivationView = z.strictObject({
  scoreId: z.string(),
  kind: z.enum(SCORE_KINDS),
  at: Instant,
  scorer: ScorerOfVersion.nullable(),
  /** Labels that the scorer of that version had learned. */
  labels: z.int().nullable(),
  /** Log-odds in nats, to the last bit: as kept, and as derived. */
  kept: z.number(),
  derived: z.number().nullable(),
  /** Everything that was kept comes out bit for bit: log-odds and leverage, with a verdict every contribution. */
  equal: z.boolean(),
  /** Why nothing could be derived. */
  problem: z.string().nullable(),
  /** What most would have changed the score, by the scorer of that version. */
  withoutSignals: z.array(WithoutSignal),
});
export type DerivationView = z.infer<typeof DerivationView>;
