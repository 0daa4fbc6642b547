import "server-only";
import { eq } from "drizzle-orm";
import { people, personRoles } from "@/db/schema/people";
import { demand } from "../auth/demand";
import { freeCases, lockCasesNotFor } from "../cases/free-cases";
import { casesChanged } from "../cases/notify";
import type { Context } from "../context";
import { invalid } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { lockPersonOrThrow, refuseLosingLastAdministrator } from "./lock";
import { readPersonOrThrow } from "./read";
import { rolesProblem } from "./rules";
import type { PersonView, SetRolesInput } from "./schema";

/** Undecided cases that they may no longer decide go back to everybody, or to the supervisors. */
export async function setRoles(ctx: Context, { id, roles }: SetRolesInput): Promise<PersonView> {
  demand(ctx, "people.manage");
  const problem = rolesProblem(roles);
  if (problem) throw invalid([{ path: "roles", message: problem }]);
  const freed: string[] = [];
  const view = await writeOnce(ctx, async (tx) => {
    freed.length = 0;
    const changed = { personId: id, roles };
    const theirCases = await lockCasesNotFor(tx, changed);
    const locked = await lockPersonOrThrow(tx, id);
    const { person } = locked;
    const now = ctx.now();
    const isSame = roles.length === person.roles.length && roles.every((role) => person.roles.includes(role));
    if (isSame) return readPersonOrThrow(tx, id, now);
    refuseLosingLastAdministrator(locked, roles.includes("administrator"), "roles");
    const grantedBy = ctx.actor.kind === "person" ? ctx.actor.personId : null;
    await tx.delete(personRoles).where(eq(personRoles.personId, id));
    await tx
      .insert(personRoles)
      .values(roles.map((role) => ({ personId: id, role, grantedAt: now, grantedBy })));
    await tx
      .update(people)
      .set({ sessionVersion: person.sessionVersion + 1 })
      .where(eq(people.id, id));
    const view = await readPersonOrThrow(tx, id, now);
    const entries = await freeCases(tx, theirCases, changed, now);
    freed.push(...entries.map(({ caseId }) => caseId));
    const entry = {
      act: "person.roles_changed",
      subjectKind: "person",
      subjectId: id,
      facts: { from: person.roles, to: roles },
    };
    await appendTrail(ctx, tx, entry, ...entries);
    return view;
  });
  casesChanged(freed);
  return view;
}
