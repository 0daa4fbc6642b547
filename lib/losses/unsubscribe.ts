import "server-only";
import { and, eq } from "drizzle-orm";
import { outbox, summaryRecipients } from "@/db/schema/mail";
import { inTransaction } from "@/db/tx";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { hashOfToken } from "./compose-summary";
import type { UnsubscribeInput } from "./summary-schema";

/**
 * Ends the weekly summaries of whoever a message's secret was sent to. The secret is the only proof there is: the
 * request of a mail program carries no session. Wrong and used secrets are answered alike, so that nobody learns
 * which exist.
 */
export async function unsubscribe(ctx: Context, { token }: UnsubscribeInput): Promise<null> {
  await inTransaction(ctx.db, async (tx) => {
    const [message] = await tx
      .select({ id: outbox.id, personId: outbox.personId })
      .from(outbox)
      .where(eq(outbox.unsubscribeHash, hashOfToken(token)));
    if (!message) return;
    const { personId } = message;
    const [ended] = await tx
      .update(summaryRecipients)
      .set({ subscribed: 0, changedAt: ctx.now() })
      .where(and(eq(summaryRecipients.personId, personId), eq(summaryRecipients.subscribed, 1)));
    if (ended.affectedRows === 0) return;
    const facts = { byMessage: message.id };
    await appendTrail(ctx, tx, {
      act: "recipient.unsubscribed",
      subjectKind: "person",
      subjectId: personId,
      facts,
    });
  });
  return null;
}

/** What a person sees who opens the address by hand: the page with the button. */
export async function showUnsubscribePage(_ctx: Context, { token }: UnsubscribeInput): Promise<Response> {
  return new Response(null, {
    status: 303,
    headers: { Location: `/unsubscribe/${encodeURIComponent(token)}` },
  });
}
