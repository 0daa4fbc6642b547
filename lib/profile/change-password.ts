import "server-only";
import { eq } from "drizzle-orm";
import { people } from "@/db/schema/people";
import { inTransaction } from "@/db/tx";
import { beginAttempt, recordRefusal, UNCHARGED } from "../auth/attempts";
import { demandPerson } from "../auth/demand";
import { hashPassword, verifyPassword } from "../auth/password";
import { passwordProblem } from "../auth/password-rules";
import type { Context } from "../context";
import { conflict, invalid } from "../errors";
import { appendTrail } from "../trail/append";
import type { ChangePasswordInput } from "./schema";

/**
 * Takes the current password, counted like a sign-in, and ends every session: the page signs in again with the new
 * one. A copy of the request fails on the old password, so it needs no memory of its answer.
 */
export async function changePassword(ctx: Context, input: ChangePasswordInput): Promise<null> {
  const { personId } = demandPerson(ctx, "account.own");
  const attempt = await beginAttempt(ctx, { personId });
  const { person } = attempt;
  const isRight = await verifyPassword(
    attempt.refusedFor ? null : (person?.passwordHash ?? null),
    input.currentPassword,
  );
  if (!isRight || !person) {
    await recordRefusal(ctx, attempt, "person.password_change_refused", {});
    throw invalid([{ path: "currentPassword", message: "is not right, or the account is locked for now" }]);
  }
  const problem =
    input.newPassword === input.currentPassword
      ? "is the current one"
      : passwordProblem(input.newPassword, [person.email, person.name]);
  const passwordHash = problem ? null : await hashPassword(input.newPassword);
  await inTransaction(ctx.db, async (tx) => {
    const [row] = await tx.select().from(people).where(eq(people.id, personId)).for("update");
    if (row?.passwordHash !== person.passwordHash) throw conflict("The password was changed meanwhile");
    const changed = passwordHash && { passwordHash, sessionVersion: row.sessionVersion + 1 };
    await tx
      .update(people)
      .set({ ...UNCHARGED, ...changed })
      .where(eq(people.id, personId));
    if (!changed) return;
    const facts = { oneTimePasswordUsed: false };
    await appendTrail(ctx, tx, {
      act: "person.password_changed",
      subjectKind: "person",
      subjectId: personId,
      facts,
    });
  });
  if (problem) throw invalid([{ path: "newPassword", message: problem }]);
  return null;
}
