import type { Database } from "@/db/client";
import { people, personRoles } from "@/db/schema/people";
import type { Role } from "@/lib/auth/codes";
import { hashPassword } from "@/lib/auth/password";
import type { Context, PersonActor } from "@/lib/context";
import { newId } from "@/lib/new-id";

export const TEST_PASSWORD = "a ladle of quiet lead";

let passwordHash: Promise<string> | undefined;

/** A person with these roles, and the actor they are once signed in. */
export async function makePerson(
  db: Database,
  roles: readonly Role[],
  fields: Partial<typeof people.$inferInsert> = {},
): Promise<PersonActor & { email: string }> {
  passwordHash ??= hashPassword(TEST_PASSWORD);
  const personId = newId();
  const row = {
    id: personId,
    email: `p${personId}@cupel.test`,
    name: `Person ${personId.slice(-4)}`,
    passwordHash: await passwordHash,
    createdAt: new Date(),
    ...fields,
  };
  await db.insert(people).values(row);
  if (roles.length > 0) {
    await db.insert(personRoles).values(roles.map((role) => ({ personId, role, grantedAt: new Date() })));
  }
  return {
    kind: "person",
    personId,
    name: row.name,
    roles,
    timeZone: "UTC",
    key: null,
    email: row.email,
  };
}

export function contextOf(
  db: Database,
  actor: Context["actor"],
  now: () => Date = () => new Date(),
): Context {
  return { actor, db, now, requestId: newId(), idempotency: null };
}
