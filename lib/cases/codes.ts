export const CASE_STATES = ["open", "claimed", "waiting", "escalated", "decided", "lapsed"] as const;
export type CaseState = (typeof CASE_STATES)[number];

/** States in which a case still waits for a verdict and has a place in the ranking. */
export const UNDECIDED_STATES = ["open", "claimed", "waiting", "escalated"] as const;

export const CASE_KINDS = ["alert", "sample", "sibling"] as const;

/** How long a claim lasts without a sign of life from its holder. */
export const LEASE_MINUTES = 10;
