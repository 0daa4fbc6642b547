export const CHANNELS = [
  "card_present",
  "card_remote",
  "cash_withdrawal",
  "credit_transfer",
  "instant_transfer",
  "direct_debit",
] as const;
export type Channel = (typeof CHANNELS)[number];

export const DIRECTIONS = ["outgoing", "incoming"] as const;
export const AUTHENTICATIONS = ["strong", "single", "none", "exempt"] as const;

/** What the sender is told to do with the payment. */
export const ACTIONS = ["pass", "review", "hold"] as const;
export type Action = (typeof ACTIONS)[number];

export const PAYMENT_STATES = [
  "pending",
  "held",
  "released",
  "refused",
  "settled",
  "recalled",
  "unknown",
] as const;

export const IMPORT_STATES = ["receiving", "queued", "running", "done", "failed"] as const;
