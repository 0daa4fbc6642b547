import "server-only";
import { eq } from "drizzle-orm";
import { outbox } from "@/db/schema/mail";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import type { MailInput, MailStateView } from "./schema";
import { lockUnsettled } from "./unsettled";

/** A person's word that an uncertain message did arrive. */
export async function markMailAsSent(ctx: Context, input: MailInput): Promise<MailStateView> {
  demandPerson(ctx, "summary.manage");
  return writeOnce<MailStateView>(ctx, async (tx) => {
    const { kind } = await lockUnsettled(tx, input.id, ["uncertain"]);
    await tx
      .update(outbox)
      .set({ state: "sent", sentAt: ctx.now(), problem: null, leaseOwner: null })
      .where(eq(outbox.id, input.id));
    const facts = { kind };
    await appendTrail(ctx, tx, { act: "mail.marked_sent", subjectKind: "mail", subjectId: input.id, facts });
    return { id: input.id, state: "sent" };
  });
}
