import "server-only";
import { eq } from "drizzle-orm";
import { summaryRecipients } from "@/db/schema/mail";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { notFound } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import type { RecipientRef } from "./summary-schema";

/** Takes a person off the list of the weekly summary. @throws KnownError not_found */
export async function removeRecipient(ctx: Context, { personId }: RecipientRef): Promise<null> {
  demandPerson(ctx, "summary.manage");
  return writeOnce(ctx, async (tx) => {
    const [gone] = await tx.delete(summaryRecipients).where(eq(summaryRecipients.personId, personId));
    if (gone.affectedRows === 0) throw notFound("The recipient");
    await appendTrail(ctx, tx, {
      act: "recipient.removed",
      subjectKind: "person",
      subjectId: personId,
      facts: {},
    });
    return null;
  });
}
