import "server-only";
import { inArray } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { outbox } from "@/db/schema/mail";
import type { Context } from "../context";
import { enqueueMail, type Message } from "../mail/enqueue";
import type { TrailEntry } from "../trail/append";
import { composeSummary, readWeekView } from "./compose-summary";
import type { Recipient } from "./recipients";
import type { WeekView } from "./schema";

export type Wanted = { recipient: Recipient; week: string };
export type PreparedSummary = Message & { period: string };

const keyOf = ({ week, recipient }: Wanted) => `weekly:${week}:${recipient.personId}`;

/** Makes the messages that have not been queued before, one at a time; each week's figures are read once. */
export async function* prepareSummaries(
  ctx: Context,
  wanted: readonly Wanted[],
  appUrl: string,
): AsyncGenerator<PreparedSummary> {
  const queued = await queuedKeys(ctx, wanted);
  const views = new Map<string, WeekView>();
  for (const one of wanted) {
    const dedupeKey = keyOf(one);
    if (queued.has(dedupeKey)) continue;
    const { week, recipient } = one;
    const view = views.get(week) ?? (await readWeekView(ctx.db, { week, by: "transaction", now: ctx.now() }));
    views.set(week, view);
    yield {
      ...(await composeSummary(view, appUrl)),
      dedupeKey,
      kind: "weekly_summary",
      period: week,
      personId: recipient.personId,
      recipient: recipient.email,
    };
  }
}

/**
 * Queues a message unless another server was first: the key of week and person decides.
 * @returns what the trail is to say of it, or null where it was queued before
 */
export async function queueSummary(
  tx: Tx,
  message: PreparedSummary,
  at: { appUrl: string; now: Date },
): Promise<TrailEntry | null> {
  if (!(await enqueueMail(tx, message, at))) return null;
  const { period: week, personId } = message;
  return { act: "summary.queued", subjectKind: "week", subjectId: week, facts: { week, personId } };
}

async function queuedKeys(ctx: Context, wanted: readonly Wanted[]): Promise<Set<string>> {
  if (wanted.length === 0) return new Set();
  const rows = await ctx.db
    .select({ key: outbox.dedupeKey })
    .from(outbox)
    .where(inArray(outbox.dedupeKey, wanted.map(keyOf)));
  return new Set(rows.map((row) => row.key));
}
