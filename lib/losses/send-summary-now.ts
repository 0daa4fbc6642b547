import "server-only";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { mailSettings } from "../mail/settings";
import { appendTrail, type TrailEntry } from "../trail/append";
import { writeOnce } from "../write-once";
import { lastCompleteWeek } from "./losses";
import { type PreparedSummary, prepareSummaries, queueSummary } from "./queue-summaries";
import { listRecipients } from "./recipients";
import type { SendNowView, WeekInput } from "./summary-schema";

/** Does not wait for the recipients' mornings; whoever was sent the week's summary before is left alone. */
export async function sendSummaryNow(ctx: Context, input: WeekInput): Promise<SendNowView> {
  demandPerson(ctx, "summary.manage");
  const week = input.week ?? (await lastCompleteWeek(ctx));
  const recipients = (await listRecipients(ctx.db)).filter((recipient) => recipient.subscribed);
  const wanted = recipients.map((recipient) => ({ recipient, week }));
  const { appUrl } = mailSettings();
  const messages: PreparedSummary[] = [];
  for await (const message of prepareSummaries(ctx, wanted, appUrl)) messages.push(message);
  return writeOnce<SendNowView>(ctx, async (tx) => {
    const entries: TrailEntry[] = [];
    for (const message of messages) {
      const entry = await queueSummary(tx, message, { appUrl, now: ctx.now() });
      if (entry) entries.push(entry);
    }
    if (entries.length > 0) await appendTrail(ctx, tx, ...entries);
    return { week, queued: entries.length, alreadyQueued: wanted.length - entries.length };
  });
}
