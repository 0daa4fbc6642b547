import "server-only";
import { asc, eq, inArray, or } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { people, personRoles } from "@/db/schema/people";
import type { Role } from "../auth/codes";
import { notFound, ruleBroken } from "../errors";
import { losesLastAdministrator } from "./rules";

type LockedPerson = typeof people.$inferSelect & { roles: Role[] };
export type Locked = { person: LockedPerson; activeAdministratorIds: string[] };

/**
 * Locks the person and every administrator, in the order of their ids: two administrators who remove each other at
 * the same moment meet here, and the second one sees what the first did.
 * @throws KnownError not_found
 */
export async function lockPersonOrThrow(tx: Tx, personId: string): Promise<Locked> {
  const administrators = tx
    .select({ id: personRoles.personId })
    .from(personRoles)
    .where(eq(personRoles.role, "administrator"));
  const rows = await tx
    .select()
    .from(people)
    .where(or(eq(people.id, personId), inArray(people.id, administrators)))
    .orderBy(asc(people.id))
    .for("update");
  const person = rows.find((row) => row.id === personId);
  if (!person) throw notFound("This person");
  // Read again under the locks: a row that came by the subquery may have lost its role while we waited.
  const roles = await tx
    .select()
    .from(personRoles)
    .where(
      inArray(
        personRoles.personId,
        rows.map((row) => row.id),
      ),
    );
  const rolesOf = (id: string) => roles.filter((row) => row.personId === id).map((row) => row.role);
  const activeAdministratorIds = rows
    .filter((row) => row.state === "active" && rolesOf(row.id).includes("administrator"))
    .map((row) => row.id);
  return { person: { ...person, roles: rolesOf(personId) }, activeAdministratorIds };
}

/** @throws KnownError rule_broken */
export function refuseLosingLastAdministrator(
  { person, activeAdministratorIds }: Locked,
  staysAdministrator: boolean,
  path: string,
): void {
  if (!person.roles.includes("administrator") || person.state !== "active") return;
  if (losesLastAdministrator(activeAdministratorIds, person.id, staysAdministrator)) {
    throw ruleBroken("This is the last active administrator; make somebody else one first", path);
  }
}
