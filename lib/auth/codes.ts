export const ROLES = ["reviewer", "supervisor", "risk_manager", "auditor", "administrator"] as const;
export type Role = (typeof ROLES)[number];

export const SCOPES = [
  "transactions:write",
  "outcomes:write",
  "cases:read",
  "cases:decide",
  "policy:write",
  "reports:read",
] as const;
export type Scope = (typeof SCOPES)[number];

export const PERSON_STATES = ["active", "deactivated"] as const;
