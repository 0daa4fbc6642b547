import { z } from "zod";
import { APPROVAL_KINDS, APPROVAL_STATES } from "./codes";

const Id = z.uuid();
const Instant = z.iso.datetime();
const PersonRef = z.strictObject({ id: Id, name: z.string() });

/** What needs a second person, as far as it has come. */
export const ApprovalView = z.strictObject({
  approvalId: Id,
  kind: z.enum(APPROVAL_KINDS),
  /** By kind: the scorer, the signal, or the person and the span of time. */
  subject: z.union([
    z.strictObject({ scorerId: Id }),
    z.strictObject({ signalId: Id }),
    z.strictObject({ personId: Id, from: Instant.nullable(), to: Instant.nullable() }),
  ]),
  state: z.enum(APPROVAL_STATES),
  reason: z.string(),
  proposedBy: PersonRef,
  proposedAt: Instant,
  settledBy: PersonRef.nullable(),
  settledAt: Instant.nullable(),
  /** Why it was refused. */
  settledReason: z.string().nullable(),
});
export type ApprovalView = z.infer<typeof ApprovalView>;

/** Newest first; the first hundred. */
export const ApprovalsView = z.strictObject({ items: z.array(ApprovalView) });
export type ApprovalsView = z.infer<typeof ApprovalsView>;

export const ApprovalsInput = z.strictObject({ state: z.enum(APPROVAL_STATES).optional() });
export type ApprovalsInput = z.infer<typeof ApprovalsInput>;

export const SettleApprovalInput = z.strictObject({ id: Id });
export type SettleApprovalInput = z.infer<typeof SettleApprovalInput>;

export const RefuseApprovalInput = z.strictObject({
  id: Id,
  reason: z.string().trim().min(1, "needs a reason").max(2000),
});
export type RefuseApprovalInput = z.infer<typeof RefuseApprovalInput>;
