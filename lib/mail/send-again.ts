import "server-only";
import { eq } from "drizzle-orm";
import { outbox } from "@/db/schema/mail";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import type { MailInput, MailStateView } from "./schema";
import { lockUnsettled } from "./unsettled";

/** A person's word that a message which failed, or may not have arrived, is to go out again. */
export async function sendMailAgain(ctx: Context, input: MailInput): Promise<MailStateView> {
  demandPerson(ctx, "summary.manage");
  return writeOnce<MailStateView>(ctx, async (tx) => {
    const { kind, state } = await lockUnsettled(tx, input.id, ["uncertain", "failed"]);
    await tx
      .update(outbox)
      .set({ state: "queued", attempts: 0, nextAttemptAt: ctx.now(), problem: null, leaseOwner: null })
      .where(eq(outbox.id, input.id));
    const facts = { kind, was: state };
    await appendTrail(ctx, tx, { act: "mail.sent_again", subjectKind: "mail", subjectId: input.id, facts });
    return { id: input.id, state: "queued" };
  });
}
