export const OUTCOME_KINDS = ["chargeback", "customer_report", "recovery", "cleared"] as const;
export const REASON_FAMILIES = ["fraud", "service", "processing", "other"] as const;
export const OUTCOME_STAGES = ["opened", "represented", "won", "lost", "withdrawn"] as const;
export const BEARERS = ["institution", "customer", "merchant", "other"] as const;
