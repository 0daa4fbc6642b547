import "server-only";
import { eq } from "drizzle-orm";
import { people } from "@/db/schema/people";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { lockPersonOrThrow, refuseLosingLastAdministrator } from "./lock";
import { readPersonOrThrow } from "./read";
import type { PersonInput, PersonView } from "./schema";

/** Their sessions end with the next request, and keys that act for them stop working. */
export const deactivatePerson = (ctx: Context, input: PersonInput) => setState(ctx, input, "deactivated");

export const reactivatePerson = (ctx: Context, input: PersonInput) => setState(ctx, input, "active");

async function setState(
  ctx: Context,
  { id }: PersonInput,
  state: "active" | "deactivated",
): Promise<PersonView> {
  demand(ctx, "people.manage");
  return writeOnce(ctx, async (tx) => {
    const locked = await lockPersonOrThrow(tx, id);
    const { person } = locked;
    if (person.state === state) return readPersonOrThrow(tx, id, ctx.now());
    if (state === "deactivated") refuseLosingLastAdministrator(locked, false, "id");
    await tx
      .update(people)
      .set({ state, sessionVersion: person.sessionVersion + 1 })
      .where(eq(people.id, id));
    const view = await readPersonOrThrow(tx, id, ctx.now());
    await appendTrail(ctx, tx, {
      act: state === "active" ? "person.reactivated" : "person.deactivated",
      subjectKind: "person",
      subjectId: id,
      facts: {},
    });
    return view;
  });
}
