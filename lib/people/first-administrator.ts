import "server-only";
import { isDuplicate } from "@/db/errors";
import { people, personRoles } from "@/db/schema/people";
import { inTransaction } from "@/db/tx";
import { hashPassword } from "../auth/password";
import { passwordProblem } from "../auth/password-rules";
import { Email } from "../auth/schema";
import type { Context } from "../context";
import { environment } from "../env";
import { newId } from "../new-id";
import { appendTrail } from "../trail/append";

/**
 * Makes the administrator that the environment names while nobody has an account yet; otherwise does nothing.
 * Two servers that start together make one. @throws Error when the password cannot be taken
 */
export async function ensureFirstAdministrator(ctx: Context): Promise<void> {
  const { CUPEL_ADMIN_EMAIL, CUPEL_ADMIN_PASSWORD } = environment();
  if (!CUPEL_ADMIN_EMAIL || !CUPEL_ADMIN_PASSWORD) return;
  if (await somebodyIsThere(ctx)) return;
  const email = Email.parse(CUPEL_ADMIN_EMAIL);
  const problem = passwordProblem(CUPEL_ADMIN_PASSWORD, [email]);
  if (problem) throw new Error(`CUPEL_ADMIN_PASSWORD: ${problem}`);
  const passwordHash = await hashPassword(CUPEL_ADMIN_PASSWORD);
  const id = newId();
  const now = ctx.now();
  try {
    await inTransaction(ctx.db, async (tx) => {
      await tx.insert(people).values({ id, email, name: "Administrator", passwordHash, createdAt: now });
      await tx.insert(personRoles).values({ personId: id, role: "administrator", grantedAt: now });
      await appendTrail(ctx, tx, {
        act: "person.added",
        subjectKind: "person",
        subjectId: id,
        facts: { roles: ["administrator"] },
      });
    });
  } catch (error) {
    if (!isDuplicate(error)) throw error;
  }
}

async function somebodyIsThere(ctx: Context): Promise<boolean> {
  const rows = await ctx.db.select({ id: people.id }).from(people).limit(1);
  return rows.length > 0;
}
