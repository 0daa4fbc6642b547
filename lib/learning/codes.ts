export const SCORER_ROLES = ["in_use", "candidate", "retired", "dropped"] as const;
export type ScorerRole = (typeof SCORER_ROLES)[number];

export const DRIFT_KINDS = ["loss", "calibration"] as const;
export type DriftKind = (typeof DRIFT_KINDS)[number];

export const OWN_SIGNAL_STATES = ["draft", "on", "off"] as const;
export type OwnSignalState = (typeof OWN_SIGNAL_STATES)[number];

export const INFLUENCE_RUN_STATES = ["running", "done", "failed"] as const;
