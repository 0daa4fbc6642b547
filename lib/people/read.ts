import "server-only";
import { and, asc, eq, inArray, like, or, sql } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { people, personRoles } from "@/db/schema/people";
import { ROLES, type Role } from "../auth/codes";
import { demand } from "../auth/demand";
import { isLocked } from "../auth/lockout";
import type { Context } from "../context";
import { notFound } from "../errors";
import type { PeopleInput, PeopleView, PersonView } from "./schema";

type Row = typeof people.$inferSelect;

/** Everybody, by name: teams are of a size that one answer holds. */
export async function listPeople(ctx: Context, input: PeopleInput): Promise<PeopleView> {
  demand(ctx, "people.read");
  const pattern = input.search ? `%${input.search.toLowerCase().replace(/[\\%_]/g, "\\$&")}%` : undefined;
  const withRole = input.role
    ? ctx.db.select({ id: personRoles.personId }).from(personRoles).where(eq(personRoles.role, input.role))
    : undefined;
  const rows = await ctx.db
    .select()
    .from(people)
    .where(
      and(
        input.state && eq(people.state, input.state),
        withRole && inArray(people.id, withRole),
        pattern ? or(like(people.email, pattern), like(sql`lower(${people.name})`, pattern)) : undefined,
      ),
    )
    .orderBy(asc(people.name), asc(people.id));
  const roles = await rolesOf(
    ctx.db,
    rows.map((row) => row.id),
  );
  return { items: rows.map((row) => viewOf(row, roles.get(row.id) ?? [], ctx.now())), next: null };
}

/** @throws KnownError not_found */
export async function readPersonOrThrow(db: Executor, id: string, now: Date): Promise<PersonView> {
  const [row] = await db.select().from(people).where(eq(people.id, id));
  if (!row) throw notFound("This person");
  return viewOf(row, (await rolesOf(db, [id])).get(id) ?? [], now);
}

async function rolesOf(db: Executor, ids: string[]): Promise<Map<string, Role[]>> {
  const byPerson = new Map<string, Role[]>(ids.map((id) => [id, []]));
  if (ids.length === 0) return byPerson;
  const rows = await db.select().from(personRoles).where(inArray(personRoles.personId, ids));
  const inOrder = [...rows].sort((a, b) => ROLES.indexOf(a.role) - ROLES.indexOf(b.role));
  for (const { personId, role } of inOrder) byPerson.get(personId)?.push(role);
  return byPerson;
}

function viewOf(row: Row, roles: Role[], now: Date): PersonView {
  return {
    id: row.id,
    email: row.email,
    name: row.name,
    roles,
    state: row.state,
    timeZone: row.timeZone,
    lockedUntil: isLocked(row, now) ? (row.lockedUntil?.toISOString() ?? null) : null,
    passwordIsOneTime: row.passwordIsOneTime === 1,
    createdAt: row.createdAt.toISOString(),
    lastSignInAt: row.lastSignInAt?.toISOString() ?? null,
  };
}
