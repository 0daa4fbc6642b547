import "server-only";
import { and, eq, inArray } from "drizzle-orm";
import type { Database } from "@/db/client";
import { outbox } from "@/db/schema/mail";
import { people, personRoles } from "@/db/schema/people";
import { inTransaction } from "@/db/tx";
import { CAPABILITIES, type Capability } from "../auth/access";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { enqueueMail, type Message } from "./enqueue";

/** Active people whose roles let them do it. */
export function listPeopleWho(
  db: Database,
  capability: Capability,
): Promise<{ id: string; email: string }[]> {
  return db
    .selectDistinct({ id: people.id, email: people.email })
    .from(people)
    .innerJoin(personRoles, eq(personRoles.personId, people.id))
    .where(and(eq(people.state, "active"), inArray(personRoles.role, [...CAPABILITIES[capability].roles])));
}

/** Queues those messages that have not been queued before, with one trail entry that says whom they go to. */
export async function askOnce(
  ctx: Context,
  entry: { act: string; subjectKind: string; subjectId: string },
  messages: readonly Message[],
  appUrl: string,
): Promise<void> {
  const keys = messages.map(({ dedupeKey }) => dedupeKey);
  if (keys.length === 0) return;
  const queued = await ctx.db
    .select({ key: outbox.dedupeKey })
    .from(outbox)
    .where(inArray(outbox.dedupeKey, keys));
  const fresh = messages.filter(({ dedupeKey }) => !queued.some(({ key }) => key === dedupeKey));
  if (fresh.length === 0) return;
  await inTransaction(ctx.db, async (tx) => {
    const asked: string[] = [];
    for (const message of fresh) {
      if (await enqueueMail(tx, message, { appUrl, now: ctx.now() })) asked.push(message.personId);
    }
    if (asked.length === 0) return;
    await appendTrail(ctx, tx, { ...entry, facts: { people: asked } });
  });
}
