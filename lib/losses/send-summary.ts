import "server-only";
import { inTransaction } from "@/db/tx";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { prepareSummaries, queueSummary } from "./queue-summaries";
import { listRecipients } from "./recipients";
import { readReportingZone } from "./reporting-zone";
import { summaryDue } from "./summary-due";

/**
 * Queues last week's summary for everybody whose morning has come. Running it again, or on two servers at once,
 * queues nothing twice.
 * @returns how many were queued now
 */
export async function sendDueSummaries(
  ctx: Context,
  { appUrl, signal }: { appUrl: string; signal?: AbortSignal },
): Promise<number> {
  const now = ctx.now();
  const [recipients, reportingZone] = await Promise.all([listRecipients(ctx.db), readReportingZone(ctx.db)]);
  const wanted = recipients.flatMap((recipient) => {
    const week = recipient.subscribed ? summaryDue(recipient, now, reportingZone) : null;
    return week === null ? [] : [{ recipient, week }];
  });
  let queued = 0;
  for await (const message of prepareSummaries(ctx, wanted, appUrl)) {
    if (signal?.aborted) break;
    const isNew = await inTransaction(ctx.db, async (tx) => {
      const entry = await queueSummary(tx, message, { appUrl, now: ctx.now() });
      if (entry) await appendTrail(ctx, tx, entry);
      return entry !== null;
    });
    if (isNew) queued += 1;
  }
  return queued;
}
