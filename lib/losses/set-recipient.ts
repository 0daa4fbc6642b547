import "server-only";
import { eq } from "drizzle-orm";
import { summaryRecipients } from "@/db/schema/mail";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { invalid } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { listReaders } from "./recipients";
import type { RecipientInput, RecipientView } from "./summary-schema";

/** Puts a person who may read losses on the list, or changes their morning; begins again what they had ended. */
export async function setRecipient(ctx: Context, input: RecipientInput): Promise<RecipientView> {
  demandPerson(ctx, "summary.manage");
  const { personId, weekday, hour } = input;
  return writeOnce<RecipientView>(ctx, async (tx) => {
    const reader = (await listReaders(tx)).find((one) => one.personId === personId);
    if (!reader) throw invalid([{ path: "personId", message: "is nobody who may read losses" }]);
    const now = ctx.now();
    const [before] = await tx
      .select()
      .from(summaryRecipients)
      .where(eq(summaryRecipients.personId, personId))
      .for("update");
    const stays = before?.subscribed === 1;
    const row = {
      weekday,
      hour,
      subscribed: 1,
      subscribedAt: stays ? before.subscribedAt : now,
      changedAt: now,
    };
    await tx
      .insert(summaryRecipients)
      .values({ personId, ...row })
      .onDuplicateKeyUpdate({ set: row });
    await appendTrail(ctx, tx, {
      act: stays ? "recipient.changed" : "recipient.added",
      subjectKind: "person",
      subjectId: personId,
      facts: { weekday, hour },
    });
    return { personId, name: reader.name, timeZone: reader.timeZone, weekday, hour, subscribed: true };
  });
}
