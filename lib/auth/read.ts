import "server-only";
import { and, eq, notExists } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { endedSessions, people, personRoles } from "@/db/schema/people";
import type { Role } from "./codes";
import type { SessionClaims } from "./session";

export type SignedInPerson = { personId: string; name: string; roles: readonly Role[]; timeZone: string };

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

async function findPerson(db: Executor, where: ReturnType<typeof and>): Promise<SignedInPerson | null> {
  const rows = await db
    .select({ personId: people.id, name: people.name, timeZone: people.timeZone, role: personRoles.role })
    .from(people)
    .leftJoin(personRoles, eq(personRoles.personId, people.id))
    .where(where);
  const [first] = rows;
  if (!first) return null;
  const roles = rows.flatMap((row) => (row.role ? [row.role] : []));
  return { personId: first.personId, name: first.name, timeZone: first.timeZone, roles };
}
