import "server-only";
import { eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { people } from "@/db/schema/people";
import { inTransaction } from "@/db/tx";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { chargeAttempt, isLocked } from "./lockout";
import { hashPassword, verifyPassword } from "./password";
import { passwordProblem } from "./password-rules";
import type { SignInInput, SignInRefusal } from "./schema";

type Person = typeof people.$inferSelect;
type Origin = { origin: string };
export type SignInResult =
  | { signedIn: true; personId: string; sessionVersion: number }
  | { signedIn: false; refusal: SignInRefusal; detail?: string };

/**
 * Checks e-mail and password. Known and unknown addresses, locked and deactivated accounts take the same work and
 * get the same answer. A one-time password is taken only together with the person's own new one.
 * `origin` is a reference to where the attempt came from, for the trail.
 */
export async function signIn(ctx: Context, input: SignInInput, { origin }: Origin): Promise<SignInResult> {
  const attempt = await beginAttempt(ctx, input.email);
  const passwordHash = attempt.refusedFor ? null : (attempt.person?.passwordHash ?? null);
  if (!(await verifyPassword(passwordHash, input.password)) || !attempt.person) {
    await recordRefusal(ctx, attempt, origin);
    return { signedIn: false, refusal: "refused" };
  }
  const { person } = attempt;
  if (!person.passwordIsOneTime) return finish(ctx, person, null, origin);
  if (input.newPassword === undefined) {
    await clearAttempts(ctx, person.id);
    return { signedIn: false, refusal: "new_password_needed" };
  }
  const problem =
    input.newPassword === input.password
      ? "must differ from the one-time password"
      : passwordProblem(input.newPassword, [person.email, person.name]);
  if (problem) {
    await clearAttempts(ctx, person.id);
    return { signedIn: false, refusal: "new_password_refused", detail: problem };
  }
  return finish(ctx, person, await hashPassword(input.newPassword), origin);
}

type Attempt = {
  person: Person | null;
  refusedFor: "unknown" | "deactivated" | "locked" | null;
  locks: boolean;
};

function beginAttempt(ctx: Context, email: string): Promise<Attempt> {
  return inTransaction(ctx.db, async (tx) => {
    const [person] = await tx.select().from(people).where(eq(people.email, email)).for("update");
    if (!person) return { person: null, refusedFor: "unknown", locks: false };
    if (person.state !== "active") return { person, refusedFor: "deactivated", locks: false };
    if (isLocked(person, ctx.now())) return { person, refusedFor: "locked", locks: false };
    const charged = chargeAttempt(person, ctx.now());
    await tx.update(people).set(charged).where(eq(people.id, person.id));
    return { person, refusedFor: null, locks: charged.lockedUntil !== null };
  });
}

async function recordRefusal(ctx: Context, attempt: Attempt, origin: string): Promise<void> {
  const subject = { subjectKind: "person", subjectId: attempt.person?.id ?? "unknown" };
  const refused = {
    act: "person.sign_in_refused",
    ...subject,
    facts: { origin, reason: attempt.refusedFor ?? "password" },
  };
  const locked = { act: "person.locked", ...subject, facts: { origin } };
  await inTransaction(ctx.db, (tx) => appendTrail(ctx, tx, refused, ...(attempt.locks ? [locked] : [])));
}

const UNCHARGED = { failedSignIns: 0, lockedUntil: null };

async function clearAttempts(ctx: Context, personId: string): Promise<void> {
  await ctx.db.update(people).set(UNCHARGED).where(eq(people.id, personId));
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
    const person = await lockPerson(tx, personId);
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

async function lockPerson(tx: Tx, personId: string): Promise<Person | undefined> {
  const [person] = await tx.select().from(people).where(eq(people.id, personId)).for("update");
  return person;
}
