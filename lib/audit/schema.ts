import { z } from "zod";
import { CASE_KINDS } from "../cases/codes";
import { Amount, DecisionView, EvidenceView, Id, Instant } from "../cases/schema";
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
