import "server-only";
import { eq } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { summaryRecipients } from "@/db/schema/mail";
import { people, personRoles } from "@/db/schema/people";
import { rolesMay } from "../auth/access";
import type { Role } from "../auth/codes";

export type Recipient = {
  personId: string;
  name: string;
  email: string;
  timeZone: string;
  weekday: number;
  hour: number;
  subscribed: boolean;
  subscribedAt: Date;
};

export type Reader = Pick<Recipient, "personId" | "name" | "email" | "timeZone">;

/** Active people who may read losses: nobody else gets them by mail. */
export async function listReaders(db: Executor): Promise<Reader[]> {
  const rows = await db
    .select({
      personId: people.id,
      name: people.name,
      email: people.email,
      timeZone: people.timeZone,
      role: personRoles.role,
    })
    .from(people)
    .innerJoin(personRoles, eq(personRoles.personId, people.id))
    .where(eq(people.state, "active"))
    .orderBy(people.name, people.id);
  const roles = new Map<string, Role[]>();
  for (const row of rows) roles.set(row.personId, [...(roles.get(row.personId) ?? []), row.role]);
  const readers = new Map(
    rows
      .filter((row) => rolesMay(roles.get(row.personId) ?? [], "losses.read"))
      .map(({ role: _, ...reader }) => [reader.personId, reader]),
  );
  return [...readers.values()];
}

/** Everybody on the list who may still read losses, those who unsubscribed included. */
export async function listRecipients(db: Executor): Promise<Recipient[]> {
  const [readers, rows] = await Promise.all([listReaders(db), db.select().from(summaryRecipients)]);
  const settings = new Map(rows.map((row) => [row.personId, row]));
  return readers.flatMap((reader) => {
    const row = settings.get(reader.personId);
    if (!row) return [];
    const { weekday, hour, subscribed, subscribedAt } = row;
    return [{ ...reader, weekday, hour, subscribed: subscribed === 1, subscribedAt }];
  });
}
