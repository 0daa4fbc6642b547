import { z } from "zod";
import { Id, Instant } from "../cases/schema";
import { CONFIDENCES, TYPOLOGIES, VERDICTS } from "./codes";

const Finding = {
  verdict: z.enum(VERDICTS),
  typology: z.enum(TYPOLOGIES).nullable().default(null),
};

const typologyFits = (finding: { verdict: string; typology: string | null }) =>
  (finding.verdict === "fraudulent") === (finding.typology !== null);
const typologyMessage = {
  path: ["typology"],
  message: "is needed with a fraudulent verdict, and with no other",
};

const Together = z
  .strictObject({ caseId: Id.optional(), transactionId: Id.optional(), ...Finding })
  .refine((item) => (item.caseId === undefined) !== (item.transactionId === undefined), {
    path: ["caseId"],
    message: "give either caseId or transactionId",
  })
  .refine(typologyFits, typologyMessage);

export const DecideInput = z
  .strictObject({
    id: Id,
    ...Finding,
    confidence: z.enum(CONFIDENCES),
    note: z.string().trim().max(4000).optional(),
    /** Revision of the case row that the person had before them. */
    seenVersion: z.int().min(1),
    scoreWasHidden: z.boolean().default(false),
    together: z.array(Together).max(50).default([]),
  })
  .refine(typologyFits, typologyMessage);
export type DecideInput = z.infer<typeof DecideInput>;

const Moved = z.strictObject({
  up: z.int(),
  down: z.int(),
  aboveHoldLine: z.int(),
  belowHoldLine: z.int(),
});

export const DecideView = z.strictObject({
  decisionId: Id,
  scorerVersion: z.int(),
  probabilityBefore: z.number(),
  /** Log-loss in nats of the score given before the decision; null where the verdict is no label. */
  loss: z.number().nullable(),
  /** Waiting cases that moved by at least a deciban; null when a server stopped before it could count. */
  moved: Moved.nullable(),
  undoUntil: Instant,
  /** The best case this person may take now. */
  next: z.strictObject({ caseId: Id }).nullable(),
});
export type DecideView = z.infer<typeof DecideView>;

export const UndoInput = z.strictObject({ id: Id });
export const CorrectionInput = z
  .strictObject({ id: Id, ...Finding, reason: z.string().trim().min(1, "needs a reason").max(4000) })
  .refine(typologyFits, typologyMessage);
export type CorrectionInput = z.infer<typeof CorrectionInput>;

/** Answer to an undo or a correction. */
export const RelearnView = z.strictObject({
  scorerVersion: z.int(),
  moved: Moved.nullable(),
  revision: z.int(),
});
export type RelearnView = z.infer<typeof RelearnView>;
