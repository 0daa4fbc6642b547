import "server-only";
import { and, desc, eq, inArray, lt, or } from "drizzle-orm";
import { outbox } from "@/db/schema/mail";
import { people } from "@/db/schema/people";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { notFound } from "../errors";
import { withoutToken } from "./compose-summary";
import { listReaders, listRecipients } from "./recipients";
import type {
  RecipientsView,
  SummariesInput,
  SummariesView,
  SummaryContentView,
  SummaryItem,
} from "./summary-schema";

/** Summaries, newest first, and among them whatever other mail failed or is uncertain. */
export async function listSummaries(ctx: Context, input: SummariesInput): Promise<SummariesView> {
  demand(ctx, "mail.read");
  const { week, cursor, limit } = input;
  const rows = await ctx.db
    .select({
      id: outbox.id,
      kind: outbox.kind,
      week: outbox.period,
      person: { id: people.id, name: people.name },
      state: outbox.state,
      attempts: outbox.attempts,
      createdAt: outbox.createdAt,
      sentAt: outbox.sentAt,
      nextAttemptAt: outbox.nextAttemptAt,
      problem: outbox.problem,
    })
    .from(outbox)
    .innerJoin(people, eq(people.id, outbox.personId))
    .where(
      and(
        or(eq(outbox.kind, "weekly_summary"), inArray(outbox.state, ["failed", "uncertain"])),
        week ? eq(outbox.period, week) : undefined,
        cursor ? lt(outbox.id, cursor) : undefined,
      ),
    )
    // Ids grow with the time they were made at.
    .orderBy(desc(outbox.id))
    .limit(limit + 1);
  const items = rows.slice(0, limit).map(toItem);
  return { items, next: rows.length > limit ? (items.at(-1)?.id ?? null) : null };
}

function toItem(row: {
  id: string;
  kind: SummaryItem["kind"];
  week: string | null;
  person: { id: string; name: string };
  state: SummaryItem["state"];
  attempts: number;
  createdAt: Date;
  sentAt: Date | null;
  nextAttemptAt: Date;
  problem: string | null;
}): SummaryItem {
  return {
    ...row,
    createdAt: row.createdAt.toISOString(),
    sentAt: row.sentAt?.toISOString() ?? null,
    nextAttemptAt: row.state === "queued" ? row.nextAttemptAt.toISOString() : null,
  };
}

/** A summary as it went out. @throws KnownError not_found */
export async function readSummary(ctx: Context, input: { id: string }): Promise<SummaryContentView> {
  demand(ctx, "mail.read");
  const [row] = await ctx.db
    .select({ subject: outbox.subject, html: outbox.html, text: outbox.text })
    .from(outbox)
    .where(and(eq(outbox.id, input.id), eq(outbox.kind, "weekly_summary")));
  if (!row) throw notFound("The summary");
  return { ...row, html: withoutToken(row.html), text: withoutToken(row.text) };
}

export async function readRecipients(ctx: Context): Promise<RecipientsView> {
  demand(ctx, "mail.read");
  const [recipients, readers] = await Promise.all([listRecipients(ctx.db), listReaders(ctx.db)]);
  const listed = new Set(recipients.map((recipient) => recipient.personId));
  return {
    items: recipients.map(({ email: _, subscribedAt: __, ...recipient }) => recipient),
    others: readers
      .filter((reader) => !listed.has(reader.personId))
      .map(({ personId, name }) => ({ personId, name })),
  };
}
