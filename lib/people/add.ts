import "server-only";
import { isDuplicate } from "@/db/errors";
import { people, personRoles } from "@/db/schema/people";
import { demand } from "../auth/demand";
import { hashPassword } from "../auth/password";
import type { Context } from "../context";
import { invalid, KnownError } from "../errors";
import { newId } from "../new-id";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { newOneTimePassword } from "./one-time-password";
import { readPersonOrThrow } from "./read";
import { rolesProblem } from "./rules";
import type { AddPersonInput, OneTimePasswordView } from "./schema";

/** The one-time password is never stored in the clear, so an answer given again comes without it. */
export async function addPerson(ctx: Context, input: AddPersonInput): Promise<OneTimePasswordView> {
  demand(ctx, "people.manage");
  const problem = rolesProblem(input.roles);
  if (problem) throw invalid([{ path: "roles", message: problem }]);
  const oneTimePassword = newOneTimePassword();
  const passwordHash = await hashPassword(oneTimePassword);
  const { email, name, roles, timeZone } = input;
  const answer = await writeOnce(ctx, async (tx) => {
    const id = newId();
    const now = ctx.now();
    await tx
      .insert(people)
      .values({ id, email, name, timeZone, passwordHash, passwordIsOneTime: 1, createdAt: now })
      .catch(refuseTakenEmail);
    const grantedBy = ctx.actor.kind === "person" ? ctx.actor.personId : null;
    await tx
      .insert(personRoles)
      .values(roles.map((role) => ({ personId: id, role, grantedAt: now, grantedBy })));
    const person = await readPersonOrThrow(tx, id, now);
    await appendTrail(ctx, tx, {
      act: "person.added",
      subjectKind: "person",
      subjectId: id,
      facts: { roles },
    });
    return { person, oneTimePassword: null };
  });
  return { ...answer, oneTimePassword };
}

function refuseTakenEmail(error: unknown): never {
  if (!isDuplicate(error)) throw error;
  const message = "belongs to somebody already";
  throw new KnownError("conflict", "This e-mail address belongs to somebody already", {
    errors: [{ path: "email", message }],
  });
}
