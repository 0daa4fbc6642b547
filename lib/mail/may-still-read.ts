import "server-only";
import { eq } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { type outbox, summaryRecipients } from "@/db/schema/mail";
import { people, personRoles } from "@/db/schema/people";
import { rolesMay } from "../auth/access";
import { CAPABILITY_TO_READ } from "./rules";

type Addressed = Pick<typeof outbox.$inferSelect, "kind" | "personId" | "recipient">;

/**
 * Whether a message may still go to whom it was queued for. Days can pass while a mail server is down: people leave,
 * change their address, lose a role or end their summaries.
 */
export async function mayStillRead(db: Executor, mail: Addressed): Promise<boolean> {
  const rows = await db
    .select({
      state: people.state,
      email: people.email,
      role: personRoles.role,
      subscribed: summaryRecipients.subscribed,
    })
    .from(people)
    .innerJoin(personRoles, eq(personRoles.personId, people.id))
    .leftJoin(summaryRecipients, eq(summaryRecipients.personId, people.id))
    .where(eq(people.id, mail.personId));
  const [person] = rows;
  if (person?.state !== "active" || person.email !== mail.recipient) return false;
  if (mail.kind === "weekly_summary" && person.subscribed !== 1) return false;
  const roles = rows.map(({ role }) => role);
  return rolesMay(roles, CAPABILITY_TO_READ[mail.kind]);
}
