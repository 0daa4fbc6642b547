import "server-only";
import { and, eq } from "drizzle-orm";
import { cases, noteDrafts } from "@/db/schema/cases";
import { inTransaction } from "@/db/tx";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { forbidden, notFound } from "../errors";
import { maySee, readerOf } from "./visibility";

/**
 * Keeps a half-written note for its author, whatever becomes of the claim; an empty one is forgotten.
 * Nothing has been said yet, so nothing of it enters the trail.
 */
export async function saveDraft(ctx: Context, input: { id: string; body: string }): Promise<null> {
  const { personId } = demandPerson(ctx, "desk.work");
  await inTransaction(ctx.db, async (tx) => {
    const [row] = await tx.select().from(cases).where(eq(cases.id, input.id));
    if (!row) throw notFound("The case");
    if (!maySee(row, readerOf(ctx.actor))) throw forbidden("This case is not yours");
    const mine = and(eq(noteDrafts.caseId, input.id), eq(noteDrafts.personId, personId));
    if (input.body.trim() === "") {
      await tx.delete(noteDrafts).where(mine);
      return;
    }
    const draft = { body: input.body, savedAt: ctx.now() };
    await tx
      .insert(noteDrafts)
      .values({ caseId: input.id, personId, ...draft })
      .onDuplicateKeyUpdate({ set: draft });
  });
  return null;
}
