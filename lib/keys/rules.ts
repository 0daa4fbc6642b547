import { CAPABILITIES, PERSONAL_SCOPES } from "../auth/access";
import type { Role, Scope } from "../auth/codes";

/** Why a key cannot carry these scopes for this person, or null where it can. `roles` is null for nobody. */
export function scopesProblem(scopes: readonly Scope[], roles: readonly Role[] | null): string | null {
  if (new Set(scopes).size !== scopes.length) return "names a scope twice";
  const personal = scopes.filter((scope) => PERSONAL_SCOPES.includes(scope));
  if (personal.length > 0 && !roles) return `${personal.join(", ")}: needs a person to act for`;
  if (personal.length === 0 && roles) return "acts for a person only with cases:decide or policy:write";
  const idle = personal.find((scope) => !roles?.some((role) => rolesWith(scope).has(role)));
  return idle ? `${idle}: this person's roles do not allow any of it` : null;
}

function rolesWith(scope: Scope): Set<Role> {
  const grants: { roles: readonly Role[]; scope?: Scope }[] = Object.values(CAPABILITIES);
  return new Set(grants.filter((grant) => grant.scope === scope).flatMap((grant) => grant.roles));
}
