import type { Channel } from "../transactions/codes";

export const ZONES = ["pass", "review", "hold"] as const;
export type Zone = (typeof ZONES)[number];

export const ORDERS = ["probability", "value_at_risk", "learning_value"] as const;
export type Order = (typeof ORDERS)[number];

export const POLICY_STATES = ["proposed", "approved", "declined", "withdrawn"] as const;
export type PolicyState = (typeof POLICY_STATES)[number];

export const ON_HOLD = ["hold", "refuse", "let_go"] as const;
export const AT_EXPIRY = ["release", "refuse"] as const;

/** What passed payments without a label teach the scorer once their labels would be final. */
export const MATURED_UNLABELLED = ["ignored", "legitimate"] as const;

/** The payer or the payee already has the money or the goods: nothing is left to hold. */
export const CHANNELS_WITHOUT_HOLD: readonly Channel[] = [
  "card_present",
  "cash_withdrawal",
  "instant_transfer",
];
