import "server-only";
import { eq } from "drizzle-orm";
import { people } from "@/db/schema/people";
import { demand } from "../auth/demand";
import { freeCases, lockCasesNotFor } from "../cases/free-cases";
import { casesChanged } from "../cases/notify";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { lockPersonOrThrow, refuseLosingLastAdministrator } from "./lock";
import { readPersonOrThrow } from "./read";
import type { PersonInput, PersonView } from "./schema";

/**
 * Their sessions end with the next request, keys that act for them stop working, and their undecided cases go back to
 * everybody, or to the supervisors.
 */
export const deactivatePerson = (ctx: Context, input: PersonInput) => setState(ctx, input, "deactivated");

export const reactivatePerson = (ctx: Context, input: PersonInput) => setState(ctx, input, "active");

async function setState(
  ctx: Context,
  { id }: PersonInput,
  state: "active" | "deactivated",
): Promise<PersonView> {
  demand(ctx, "people.manage");
  const freed: string[] = [];
  const view = await writeOnce(ctx, async (tx) => {
    const now = ctx.now();
    freed.length = 0;
    const nobody = { personId: id, roles: [] };
    const theirCases = state === "deactivated" ? await lockCasesNotFor(tx, nobody) : [];
    const locked = await lockPersonOrThrow(tx, id);
    const { person } = locked;
    if (person.state === state) return readPersonOrThrow(tx, id, now);
    if (state === "deactivated") refuseLosingLastAdministrator(locked, false, "id");
    await tx
      .update(people)
      .set({ state, sessionVersion: person.sessionVersion + 1 })
      .where(eq(people.id, id));
    const view = await readPersonOrThrow(tx, id, now);
    const entries = await freeCases(tx, theirCases, nobody, now);
    freed.push(...entries.map(({ caseId }) => caseId));
    const changed = {
      act: state === "active" ? "person.reactivated" : "person.deactivated",
      subjectKind: "person",
      subjectId: id,
      facts: {},
    };
    await appendTrail(ctx, tx, changed, ...entries);
    return view;
  });
  casesChanged(freed);
  return view;
}
