export const APPROVAL_KINDS = [
  "scorer.promote",
  "signal.switch_on",
  "signal.switch_off",
  "labels.remove",
] as const;
export type ApprovalKind = (typeof APPROVAL_KINDS)[number];

export const APPROVAL_STATES = ["waiting", "approved", "refused", "withdrawn"] as const;
export type ApprovalState = (typeof APPROVAL_STATES)[number];

/** What an approval is about, by its kind. */
export type ApprovalSubject =
  | { scorerId: string }
  | { signalId: string }
  /** Labels of one person that stand at or after `from` and before `to`; an open end takes all. */
  | { personId: string; from: string | null; to: string | null };
