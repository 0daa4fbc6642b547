import type { Role, Scope } from "./codes";

type Grant = {
  roles: readonly Role[];
  /** Lets a machine's key in. */
  scope?: Scope;
  /** Scopes that include it, because their own acts begin with it. */
  also?: readonly Scope[];
};

const everyone: readonly Role[] = ["reviewer", "supervisor", "risk_manager", "auditor", "administrator"];

/**
 * The one matrix of who may do what. Endpoints and pages name a capability; nothing else grants.
 * Scopes that act for a person carry that person's roles as well.
 */
export const CAPABILITIES = {
  "account.own": { roles: everyone },
  "cases.read": {
    roles: ["reviewer", "supervisor", "risk_manager", "auditor"],
    scope: "cases:read",
    also: ["cases:decide"],
  },
  "desk.work": { roles: ["reviewer", "supervisor"], scope: "cases:decide" },
  "case.correct": { roles: ["supervisor"], scope: "cases:decide" },
  "case.assign": { roles: ["supervisor"], scope: "cases:decide" },
  "floor.read": { roles: ["supervisor"] },
  "policy.read": { roles: ["supervisor", "risk_manager", "auditor"], scope: "reports:read" },
  "policy.propose": { roles: ["supervisor"], scope: "policy:write" },
  "policy.approve": { roles: ["supervisor", "risk_manager"], scope: "policy:write" },
  "scorer.read": { roles: ["supervisor", "risk_manager", "auditor"], scope: "reports:read" },
  "scorer.manage": { roles: ["supervisor"] },
  // What named people did, and what is said of them, is for people and for no machine.
  "influence.read": { roles: ["supervisor", "risk_manager", "auditor"] },
  "approvals.read": { roles: ["supervisor", "risk_manager", "auditor"] },
  "approvals.settle": { roles: ["supervisor", "risk_manager"] },
  "losses.read": { roles: ["supervisor", "risk_manager", "auditor"], scope: "reports:read" },
  "summary.manage": { roles: ["risk_manager"] },
  "trail.own": { roles: ["reviewer", "supervisor", "risk_manager", "auditor"] },
  "trail.read": { roles: ["supervisor", "risk_manager", "auditor"], scope: "reports:read" },
  "intake.send": { roles: [], scope: "transactions:write" },
  "outcomes.send": { roles: ["supervisor", "risk_manager"], scope: "outcomes:write" },
  "intake.read": { roles: ["supervisor", "administrator", "auditor"] },
  "intake.upload": { roles: ["supervisor"] },
  "keys.manage": { roles: ["administrator"] },
  "people.read": { roles: ["administrator", "auditor"] },
  "people.manage": { roles: ["administrator"] },
  "mail.read": { roles: ["administrator", "risk_manager", "auditor"] },
  "metrics.read": { roles: [], scope: "reports:read" },
} as const satisfies Record<string, Grant>;

export type Capability = keyof typeof CAPABILITIES;

/** Scopes whose key acts with one named person's rights. */
export const PERSONAL_SCOPES: readonly Scope[] = ["cases:decide", "policy:write"];

function grantOf(capability: Capability): Grant {
  return CAPABILITIES[capability];
}

export function rolesMay(roles: readonly Role[], capability: Capability): boolean {
  return roles.some((role) => grantOf(capability).roles.includes(role));
}

/** Scopes of a key that let it in. */
export function scopesFor(capability: Capability): readonly Scope[] {
  const { scope, also = [] } = grantOf(capability);
  return scope ? [scope, ...also] : also;
}

/**
 * A key needs a scope, and one that acts for a person has that person's rights and no more: `personRoles` are theirs,
 * null for a key that acts for nobody. What no role may do is for machines alone and asks for the scope only.
 */
export function keyMay(
  scopes: readonly Scope[],
  personRoles: readonly Role[] | null,
  capability: Capability,
): boolean {
  const fitting = scopesFor(capability).filter((scope) => scopes.includes(scope));
  if (personRoles === null) return fitting.some((scope) => !PERSONAL_SCOPES.includes(scope));
  return fitting.length > 0 && (grantOf(capability).roles.length === 0 || rolesMay(personRoles, capability));
}
