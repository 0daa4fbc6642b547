export const ZONES = ["pass", "review", "hold"] as const;
export type Zone = (typeof ZONES)[number];

export const ORDERS = ["probability", "value_at_risk", "learning_value"] as const;
export type Order = (typeof ORDERS)[number];

export const POLICY_STATES = ["proposed", "approved", "declined", "withdrawn"] as const;
