import "server-only";
import { eq } from "drizzle-orm";
import { people } from "@/db/schema/people";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { profileOf } from "./read";
import type { ProfileView, SetTimeZoneInput } from "./schema";

export async function setTimeZone(ctx: Context, { timeZone }: SetTimeZoneInput): Promise<ProfileView> {
  const actor = demandPerson(ctx, "account.own");
  return writeOnce(ctx, async (tx) => {
    await tx.update(people).set({ timeZone }).where(eq(people.id, actor.personId));
    const view = await profileOf(tx, actor);
    await appendTrail(ctx, tx, {
      act: "person.time_zone_changed",
      subjectKind: "person",
      subjectId: actor.personId,
      facts: { timeZone },
    });
    return view;
  });
}
