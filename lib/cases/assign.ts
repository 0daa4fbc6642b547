import "server-only";
import type { Tx } from "@/db/client";
import { rolesMay } from "../auth/access";
import { demandPerson } from "../auth/demand";
import { findActivePerson } from "../auth/read";
import type { Context } from "../context";
import { invalid } from "../errors";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { changeCase, lockCaseOrThrow, stateView } from "./locked-case";
import { casesChanged } from "./notify";
import { type Asker, assign } from "./rules";
import type { CaseStateView } from "./schema";

/** Assigns a case to a person, or to nobody; somebody else's claim on it ends. */
export async function assignCase(
  ctx: Context,
  input: { id: string; personId: string | null },
): Promise<CaseStateView> {
  demandPerson(ctx, "case.assign");
  const view = await writeOnce(ctx, async (tx) => {
    const now = ctx.now();
    const row = await lockCaseOrThrow(tx, input.id);
    const to = input.personId === null ? null : await findDeciderOrThrow(tx, input.personId);
    const assigned = await changeCase(tx, row, assign(row, to, now), now);
    await appendTrail(ctx, tx, {
      act: to ? "case.assigned" : "case.unassigned",
      subjectKind: "case",
      subjectId: row.id,
      caseId: row.id,
      facts: {
        revision: assigned.revision,
        to: to?.personId ?? null,
        from: row.assignedTo,
        claimEndedOf: assigned.claimedBy === row.claimedBy ? null : row.claimedBy,
      },
    });
    return stateView(assigned);
  });
  casesChanged([view.caseId]);
  return view;
}

/** @throws KnownError invalid unless the person is active and may decide */
export async function findDeciderOrThrow(tx: Tx, personId: string): Promise<Asker> {
  const person = await findActivePerson(tx, personId);
  if (!person) throw invalid([{ path: "personId", message: "is not an active person" }]);
  if (!rolesMay(person.roles, "desk.work")) {
    throw invalid([{ path: "personId", message: "may not decide cases" }]);
  }
  return person;
}
