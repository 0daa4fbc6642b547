import type { Role } from "../auth/codes";

/** Those who check the work, or give the rights, must not do the work. */
const ALONE: readonly Role[] = ["auditor", "administrator"];

/** Why these roles cannot be held by one person, or null where they can. */
export function rolesProblem(roles: readonly Role[]): string | null {
  if (roles.length === 0) return "needs at least one role";
  if (new Set(roles).size !== roles.length) return "names a role twice";
  const alone = roles.find((role) => ALONE.includes(role));
  if (alone && roles.length > 1) return `${alone} combines with no other role`;
  return null;
}

/** Whether the installation would be left without anybody who can manage it. */
export function losesLastAdministrator(
  activeAdministratorIds: readonly string[],
  personId: string,
  staysAdministrator: boolean,
): boolean {
  return !staysAdministrator && activeAdministratorIds.every((id) => id === personId);
}
