export const MAIL_KINDS = ["weekly_summary", "case_assigned", "approval_wanted", "deadline_digest"] as const;
export const MAIL_STATES = ["queued", "sending", "sent", "failed", "uncertain"] as const;
