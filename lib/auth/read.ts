import "server-only";
import { and, eq, isNull, notExists } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { apiKeys, endedSessions, people, personRoles } from "@/db/schema/people";
import type { Role } from "./codes";
import type { SessionClaims } from "./session";

export type SignedInPerson = { personId: string; name: string; roles: readonly Role[]; timeZone: string };

const PERSON = { personId: people.id, name: people.name, timeZone: people.timeZone };

/** The person while active, with the roles as they are now: a change acts on the next request. */
export async function findActivePerson(db: Executor, personId: string): Promise<SignedInPerson | null> {
  return findPerson(db, and(eq(people.id, personId), eq(people.state, "active")));
}

/** As above, and only while the session's version is still the person's and nobody signed out of it. */
export async function findPersonForSession(
  db: Executor,
  { sub, sid, sessionVersion }: Pick<SessionClaims, "sub" | "sid" | "sessionVersion">,
): Promise<SignedInPerson | null> {
  const ended = db.select({ id: endedSessions.id }).from(endedSessions).where(eq(endedSessions.id, sid));
  return findPerson(
    db,
    and(
      eq(people.id, sub),
      eq(people.state, "active"),
      eq(people.sessionVersion, sessionVersion),
      notExists(ended),
    ),
  );
}

/** The key while it is not revoked, and the active person it acts for, with the roles as they are now. */
export async function findKey(
  db: Executor,
  hash: Buffer,
): Promise<{ row: typeof apiKeys.$inferSelect; person: SignedInPerson | null } | null> {
  const rows = await db
    .select({ row: apiKeys, person: PERSON, role: personRoles.role })
    .from(apiKeys)
    .leftJoin(people, and(eq(people.id, apiKeys.actsForPersonId), eq(people.state, "active")))
    .leftJoin(personRoles, eq(personRoles.personId, people.id))
    .where(and(eq(apiKeys.hash, hash), isNull(apiKeys.revokedAt)));
  const [first] = rows;
  if (!first) return null;
  return { row: first.row, person: first.person && { ...first.person, roles: rolesIn(rows) } };
}

const rolesIn = (rows: readonly { role: Role | null }[]) => rows.flatMap(({ role }) => role ?? []);

async function findPerson(db: Executor, where: ReturnType<typeof and>): Promise<SignedInPerson | null> {
  const rows = await db
    .select({ person: PERSON, role: personRoles.role })
    .from(people)
    .leftJoin(personRoles, eq(personRoles.personId, people.id))
    .where(where);
  const [first] = rows;
  return first ? { ...first.person, roles: rolesIn(rows) } : null;
}
