import { z } from "zod";
import { CONFIDENCES, TYPOLOGIES, VERDICTS } from "../decisions/codes";
import { ZONES } from "../policy/codes";
import { AUTHENTICATIONS, CHANNELS, DIRECTIONS, PAYMENT_STATES } from "../transactions/codes";
import { CASE_KINDS, CASE_STATES } from "./codes";

export const Id = z.uuid();
export const Instant = z.iso.datetime();
/** Amount as decimal string in the currency beside it. */
export const Amount = z.string();
const PersonRef = z.strictObject({ id: Id, name: z.string() });

export const QueueItem = z.strictObject({
  caseId: Id,
  number: z.int(),
  externalId: z.string(),
  accountId: z.string(),
  amount: Amount,
  currency: z.string(),
  channel: z.enum(CHANNELS),
  occurredAt: Instant,
  /** Null while the policy hides scores until the verdict, as evidence is. */
  probability: z.number().nullable(),
  evidenceDecibans: z.number().nullable(),
  zone: z.enum(ZONES),
  kind: z.enum(CASE_KINDS),
  state: z.enum(CASE_STATES),
  paymentState: z.enum(PAYMENT_STATES),
  holdExpiresAt: Instant.nullable(),
  dueAt: Instant,
  overdue: z.boolean(),
  assignedTo: PersonRef.nullable(),
  claimedBy: PersonRef.nullable(),
});
export type QueueItem = z.infer<typeof QueueItem>;

export const QueueInput = z.strictObject({
  cursor: z.string().max(200).optional(),
  limit: z.coerce.number().int().min(1).max(1000).default(200),
  zone: z.enum(ZONES).optional(),
  channel: z.enum(CHANNELS).optional(),
  state: z.enum(["open", "claimed", "waiting", "escalated"]).optional(),
  /** A person's id, `me`, or `nobody`. */
  assignee: z.union([Id, z.enum(["me", "nobody"])]).optional(),
  search: z.string().trim().max(64).optional(),
});
export type QueueInput = z.infer<typeof QueueInput>;

export const QueueView = z.strictObject({
  version: z.int(),
  total: z.int(),
  items: z.array(QueueItem),
  next: z.string().nullable(),
});
export type QueueView = z.infer<typeof QueueView>;

/** Evidence of every waiting case for the rug on the axis: decibans, in queue order; none while the policy hides scores. */
export const RugView = z.strictObject({
  version: z.int(),
  reviewDecibans: z.number(),
  holdDecibans: z.number(),
  evidenceDecibans: z.array(z.number()),
});
export type RugView = z.infer<typeof RugView>;

/** One bar on the balance: what one signal adds, in decibans. */
export const SignalEvidence = z.strictObject({
  key: z.string(),
  name: z.string(),
  /** What the signal measured, in words: "4 payments in 1 h". */
  reading: z.string(),
  explanation: z.string(),
  decibans: z.number(),
  available: z.boolean(),
});
export type SignalEvidence = z.infer<typeof SignalEvidence>;

/** How the score would stand without one signal, all else equal. Such changes do not add up: signals act together. */
export const WithoutSignal = z.strictObject({
  key: z.string(),
  name: z.string(),
  totalDecibans: z.number(),
  probability: z.number(),
  /** Without it − with it. */
  changeDecibans: z.number(),
});
export type WithoutSignal = z.infer<typeof WithoutSignal>;

/** base rate + Σ signals + little experience = total, to 1e-9. */
export const EvidenceView = z.strictObject({
  probability: z.number(),
  totalDecibans: z.number(),
  baseRateDecibans: z.number(),
  signals: z.array(SignalEvidence),
  littleExperienceDecibans: z.number(),
  /** The three signals that most would change the score; null for a score of the past, whose scorer is not at hand. */
  withoutSignals: z.array(WithoutSignal).nullable(),
  reviewDecibans: z.number(),
  holdDecibans: z.number(),
  /** Which scorer gave it, by its name; versions go on from one scorer in use to the next. */
  scorerName: z.string(),
  scorerVersion: z.int(),
  policyVersion: z.int(),
});
export type EvidenceView = z.infer<typeof EvidenceView>;

export const LinkedCase = z.strictObject({
  by: z.enum(["account", "card", "device", "counterparty"]),
  transactionId: Id,
  caseId: Id.nullable(),
  number: z.int().nullable(),
  externalId: z.string(),
  accountId: z.string(),
  occurredAt: Instant,
  amount: Amount,
  currency: z.string(),
  channel: z.enum(CHANNELS),
  state: z.enum(CASE_STATES).nullable(),
  verdict: z.enum(VERDICTS).nullable(),
  /** Null while it is undecided and the policy hides scores. */
  probability: z.number().nullable(),
  /** Same account and within 24 h: can be decided in the same act. */
  together: z.boolean(),
});
export type LinkedCase = z.infer<typeof LinkedCase>;

export const DecisionView = z.strictObject({
  decisionId: Id,
  kind: z.enum(["decision", "correction", "second_review", "adjudication"]),
  by: PersonRef,
  verdict: z.enum(VERDICTS),
  typology: z.enum(TYPOLOGIES).nullable(),
  confidence: z.enum(CONFIDENCES),
  reason: z.string().nullable(),
  decidedAt: Instant,
  undoUntil: Instant,
  undoneAt: Instant.nullable(),
  stands: z.boolean(),
});
export type DecisionView = z.infer<typeof DecisionView>;

export const TimelineEntry = z.strictObject({
  at: Instant,
  act: z.string(),
  by: z.string(),
  detail: z.string().nullable(),
});

export const CaseView = z.strictObject({
  caseId: Id,
  number: z.int(),
  kind: z.enum(CASE_KINDS),
  state: z.enum(CASE_STATES),
  zone: z.enum(ZONES),
  revision: z.int(),
  openedAt: Instant,
  dueAt: Instant,
  waitUntil: Instant.nullable(),
  assignedTo: PersonRef.nullable(),
  claimedBy: PersonRef.nullable(),
  claimExpiresAt: Instant.nullable(),
  /** Held by the person who asks. */
  mine: z.boolean(),
  transaction: z.strictObject({
    transactionId: Id,
    source: z.string(),
    externalId: z.string(),
    occurredAt: Instant,
    receivedAt: Instant,
    amount: Amount,
    currency: z.string(),
    amountBase: Amount.nullable(),
    baseCurrency: z.string(),
    direction: z.enum(DIRECTIONS),
    channel: z.enum(CHANNELS),
    remote: z.boolean().nullable(),
    accountId: z.string(),
    counterpartyId: z.string(),
    counterpartyName: z.string().nullable(),
    cardRef: z.string().nullable(),
    deviceId: z.string().nullable(),
    ipAddress: z.string().nullable(),
    mcc: z.string().nullable(),
    counterpartyCountry: z.string().nullable(),
    accountCountry: z.string().nullable(),
    authentication: z.enum(AUTHENTICATIONS).nullable(),
    accountOpenedAt: Instant.nullable(),
    upstreamScore: z.number().nullable(),
    ruleHits: z.array(z.string()),
    attributes: z.record(z.string(), z.union([z.string(), z.number(), z.boolean()])),
    paymentState: z.enum(PAYMENT_STATES),
    holdExpiresAt: Instant.nullable(),
  }),
  /** Null while the policy hides the score until a verdict is given. */
  evidence: EvidenceView.nullable(),
  links: z.array(LinkedCase),
  decisions: z.array(DecisionView),
  notes: z.array(z.strictObject({ by: PersonRef, writtenAt: Instant, body: z.string() })),
  draft: z.string(),
  timeline: z.array(TimelineEntry),
});
export type CaseView = z.infer<typeof CaseView>;

const CaseId = z.strictObject({ id: Id });
const Note = z.string().trim().min(1, "needs some text").max(4000);

export const CaseInput = CaseId;
export const ClaimInput = CaseId;
export const ReleaseInput = CaseId;
export const EscalateInput = CaseId.extend({ note: Note });
export const WaitInput = CaseId.extend({ until: Instant, note: Note });
export const AssignInput = CaseId.extend({ personId: Id.nullable() });
export const NoteInput = CaseId.extend({ body: Note });
export const DraftInput = CaseId.extend({ body: z.string().max(4000) });
export const NextInput = z.strictObject({
  /** Cases the asker has in hand already and would not like to be served again. */
  notThese: z.array(Id).max(10).default([]),
});

/** Where the case stands after a change of its state; `revision` goes into the next decision as `seenVersion`. */
export const CaseStateView = z.strictObject({
  caseId: Id,
  state: z.enum(CASE_STATES),
  revision: z.int(),
  claimExpiresAt: Instant.nullable(),
});
export type CaseStateView = z.infer<typeof CaseStateView>;
