import "server-only";
import { eq } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { people } from "@/db/schema/people";
import { invalid, notFound } from "../errors";
import type { RemovalPreviewInput } from "./influence-schema";

/** Whose labels of which time, with the person's name. @throws KnownError not_found, invalid */
export async function checkedSubject(db: Executor, { personId, from, to }: RemovalPreviewInput) {
  if (from && to && Date.parse(from) >= Date.parse(to))
    throw invalid([{ path: "to", message: "must be later than from" }]);
  const [person] = await db
    .select({ id: people.id, name: people.name })
    .from(people)
    .where(eq(people.id, personId));
  if (!person) throw notFound("This person");
  // One way to write a moment, so that the same wish is not proposed twice.
  const instant = (at: string | undefined) => (at ? new Date(at).toISOString() : null);
  return { person, subject: { personId, from: instant(from), to: instant(to) } };
}
