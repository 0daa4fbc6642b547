import "server-only";
import { eq } from "drizzle-orm";
import { people } from "@/db/schema/people";
import { UNCHARGED } from "../auth/attempts";
import { demand } from "../auth/demand";
import { hashPassword } from "../auth/password";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { lockPersonOrThrow } from "./lock";
import { newOneTimePassword } from "./one-time-password";
import { readPersonOrThrow } from "./read";
import type { OneTimePasswordView, PersonInput } from "./schema";

export async function resetPassword(ctx: Context, { id }: PersonInput): Promise<OneTimePasswordView> {
  demand(ctx, "people.manage");
  const oneTimePassword = newOneTimePassword();
  const passwordHash = await hashPassword(oneTimePassword);
  const answer = await writeOnce(ctx, async (tx) => {
    const { person } = await lockPersonOrThrow(tx, id);
    await tx
      .update(people)
      .set({
        ...UNCHARGED,
        passwordHash,
        passwordIsOneTime: 1,
        sessionVersion: person.sessionVersion + 1,
      })
      .where(eq(people.id, id));
    const view = await readPersonOrThrow(tx, id, ctx.now());
    await appendTrail(ctx, tx, {
      act: "person.password_reset",
      subjectKind: "person",
      subjectId: id,
      facts: {},
    });
    return { person: view, oneTimePassword: null };
  });
  return { ...answer, oneTimePassword };
}
