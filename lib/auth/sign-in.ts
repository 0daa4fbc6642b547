import "server-only";
import { eq } from "drizzle-orm";
import { people } from "@/db/schema/people";
import { inTransaction } from "@/db/tx";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { type Attempt, beginAttempt, clearAttempts, recordRefusal, UNCHARGED } from "./attempts";
import { hashPassword, verifyPassword } from "./password";
import { passwordProblem } from "./password-rules";
import type { SignInInput, SignInRefusal } from "./schema";

type Person = NonNullable<Attempt["person"]>;
export type SignInResult =
  | { signedIn: true; personId: string; sessionVersion: number }
  | { signedIn: false; refusal: SignInRefusal; detail?: string };

/**
 * Checks e-mail and password. Known and unknown addresses, locked and deactivated accounts take the same work and
 * get the same answer. A one-time password is taken only together with the person's own new one.
 * `origin` is a reference to where the attempt came from, for the trail.
 */
export async function signIn(ctx: Context, input: SignInInput, origin: string): Promise<SignInResult> {
  const attempt = await beginAttempt(ctx, { email: input.email });
  const passwordHash = attempt.refusedFor ? null : (attempt.person?.passwordHash ?? null);
  const isRight = await verifyPassword(passwordHash, input.password);
  if (!isRight || !attempt.person) {
    await recordRefusal(ctx, attempt, "person.sign_in_refused", { origin });
    return { signedIn: false, refusal: "refused" };
  }
  const { person } = attempt;
  if (!person.passwordIsOneTime) return finish(ctx, person, null, origin);
  const refusal = newPasswordRefusal(person, input);
  if (refusal || input.newPassword === undefined) {
    await clearAttempts(ctx, person.id);
    return { signedIn: false, refusal: "new_password_needed", ...refusal };
  }
  return finish(ctx, person, await hashPassword(input.newPassword), origin);
}

function newPasswordRefusal(
  person: Person,
  { password, newPassword }: SignInInput,
): { refusal: SignInRefusal; detail: string } | null {
  if (newPassword === undefined) return null;
  const detail =
    newPassword === password
      ? "must differ from the one-time password"
      : passwordProblem(newPassword, [person.email, person.name]);
  return detail ? { refusal: "new_password_refused", detail } : null;
}

/** The password was checked outside the lock, so the row must still be the one it was checked against. */
async function finish(
  ctx: Context,
  checked: Person,
  newHash: string | null,
  origin: string,
): Promise<SignInResult> {
  const { id: personId } = checked;
  return inTransaction(ctx.db, async (tx) => {
    const [person] = await tx.select().from(people).where(eq(people.id, personId)).for("update");
    const unchanged =
      person?.state === "active" &&
      person.passwordHash === checked.passwordHash &&
      person.passwordIsOneTime === checked.passwordIsOneTime;
    if (!unchanged) return { signedIn: false, refusal: "refused" };
    const sessionVersion = person.sessionVersion + (newHash ? 1 : 0);
    await tx
      .update(people)
      .set({
        ...UNCHARGED,
        lastSignInAt: ctx.now(),
        sessionVersion,
        ...(newHash && { passwordHash: newHash, passwordIsOneTime: 0 }),
      })
      .where(eq(people.id, personId));
    const asPerson: Context = {
      ...ctx,
      actor: { kind: "person", personId, name: person.name, roles: [], timeZone: person.timeZone, key: null },
    };
    const subject = { subjectKind: "person", subjectId: personId };
    const set = { act: "person.password_changed", ...subject, facts: { oneTimePasswordUsed: true } };
    const signedIn = { act: "person.signed_in", ...subject, facts: { origin } };
    await appendTrail(asPerson, tx, ...(newHash ? [set] : []), signedIn);
    return { signedIn: true, personId, sessionVersion };
  });
}
