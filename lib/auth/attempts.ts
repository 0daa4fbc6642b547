import "server-only";
import { eq } from "drizzle-orm";
import { people } from "@/db/schema/people";
import { inTransaction } from "@/db/tx";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { chargeAttempt, isLocked } from "./lockout";

type Person = typeof people.$inferSelect;

/** One use of a password, counted before the password is looked at. */
export type Attempt = {
  person: Person | null;
  /** Set where no password will do. */
  refusedFor: "unknown" | "deactivated" | "locked" | null;
  /** Whether this attempt, if it fails, is the one that locks the account. */
  locks: boolean;
};

export const UNCHARGED = { failedSignIns: 0, lockedUntil: null };

export function beginAttempt(ctx: Context, who: { email: string } | { personId: string }): Promise<Attempt> {
  const theirs = "email" in who ? eq(people.email, who.email) : eq(people.id, who.personId);
  return inTransaction(ctx.db, async (tx) => {
    const [person] = await tx.select().from(people).where(theirs).for("update");
    if (!person) return { person: null, refusedFor: "unknown", locks: false };
    if (person.state !== "active") return { person, refusedFor: "deactivated", locks: false };
    if (isLocked(person, ctx.now())) return { person, refusedFor: "locked", locks: false };
    const charged = chargeAttempt(person, ctx.now());
    await tx.update(people).set(charged).where(eq(people.id, person.id));
    return { person, refusedFor: null, locks: charged.lockedUntil !== null };
  });
}

/** The password was right. */
export async function clearAttempts(ctx: Context, personId: string): Promise<void> {
  await ctx.db.update(people).set(UNCHARGED).where(eq(people.id, personId));
}

/** The password was wrong, or none would have done. */
export async function recordRefusal(
  ctx: Context,
  attempt: Attempt,
  act: "person.sign_in_refused" | "person.password_change_refused",
  facts: { origin?: string },
): Promise<void> {
  const subject = { subjectKind: "person", subjectId: attempt.person?.id ?? "unknown" };
  const refused = { act, ...subject, facts: { ...facts, reason: attempt.refusedFor ?? "password" } };
  const locked = { act: "person.locked", ...subject, facts };
  await inTransaction(ctx.db, (tx) => appendTrail(ctx, tx, refused, ...(attempt.locks ? [locked] : [])));
}
