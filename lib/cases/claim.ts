import "server-only";
import { eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { demandPerson } from "../auth/demand";
import type { Context } from "../context";
import { forbidden } from "../errors";
import { policyInForce } from "../policy/read";
import { appendTrail } from "../trail/append";
import { writeOnce } from "../write-once";
import { changeCase, type LockedCase, lockCaseOrThrow, lockRoomForClaim, stateView } from "./locked-case";
import { casesChanged } from "./notify";
import { type CaseChange, claim, isPick } from "./rules";
import type { CaseStateView } from "./schema";

const PICKING_IS_OFF = "Your team takes the next case; picking from the list is switched off";

/** Claims a case for ten minutes; its holder renews the lease with the same call. */
export async function claimCase(ctx: Context, input: { id: string }): Promise<CaseStateView> {
  const person = demandPerson(ctx, "desk.work");
  const view = await writeOnce(ctx, async (tx) => {
    const now = ctx.now();
    const row = await lockCaseOrThrow(tx, input.id);
    const change = claim(row, person, now);
    const { terms } = await policyInForce(tx, now);
    if (terms.takeNextOnly && isPick(row, person)) throw forbidden(PICKING_IS_OFF);
    if (row.claimedBy === person.personId) return stateView(await renew(tx, row, change, now));
    await lockRoomForClaim(tx, person.personId, now);
    const claimed = await changeCase(tx, row, change, now);
    await appendTrail(ctx, tx, {
      act: "case.claimed",
      subjectKind: "case",
      subjectId: row.id,
      caseId: row.id,
      facts: { revision: claimed.revision, before: row.state, lapsedClaimOf: row.claimedBy },
    });
    return stateView(claimed);
  });
  casesChanged([view.caseId]);
  return view;
}

/** A longer lease is no change of the case: its revision stays, so that a verdict on the way still fits. */
async function renew(tx: Tx, row: LockedCase, change: CaseChange, now: Date): Promise<LockedCase> {
  const claimExpiresAt = change.claimExpiresAt ?? null;
  await tx.update(cases).set({ claimExpiresAt, changedAt: now }).where(eq(cases.id, row.id));
  return { ...row, claimExpiresAt };
}
