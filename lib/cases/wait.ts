import "server-only";
import { eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { transactions } from "@/db/schema/transactions";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { addNote } from "./add-note";
import { changeCase, lockCaseOrThrow, stateView } from "./locked-case";
import { casesChanged } from "./notify";
import { setWaiting } from "./rules";
import type { CaseStateView } from "./schema";

/** Sets the case in hand aside until a time, for instance for the customer's answer; then it comes back by itself. */
export async function setCaseWaiting(
  ctx: Context,
  input: { id: string; until: string; note: string },
): Promise<CaseStateView> {
  const person = demandPerson(ctx, "desk.work");
  const view = await writeOnce(ctx, async (tx) => {
    const now = ctx.now();
    const row = await lockCaseOrThrow(tx, input.id);
    const holdExpiresAt = await findHoldEnd(tx, row.transactionId);
    const change = setWaiting(row, person, new Date(input.until), holdExpiresAt, now);
    const waiting = await changeCase(tx, row, change, now);
    const noteId = await addNote(tx, { caseId: row.id, personId: person.personId, body: input.note, now });
    await appendTrail(ctx, tx, {
      act: "case.set_aside",
      subjectKind: "case",
      subjectId: row.id,
      caseId: row.id,
      facts: { revision: waiting.revision, noteId, until: new Date(input.until).toISOString() },
    });
    return stateView(waiting);
  });
  casesChanged([view.caseId]);
  return view;
}

/** Null unless the payment is held now. */
async function findHoldEnd(tx: Tx, transactionId: string): Promise<Date | null> {
  const [payment] = await tx
    .select({ state: transactions.paymentState, holdExpiresAt: transactions.holdExpiresAt })
    .from(transactions)
    .where(eq(transactions.id, transactionId));
  return payment?.state === "held" ? payment.holdExpiresAt : null;
}
