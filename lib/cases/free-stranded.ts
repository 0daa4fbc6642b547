import "server-only";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import { findActivePerson } from "../auth/read";
import type { Context } from "../context";
import { appendTrail } from "../trail/append";
import { findCasesNotFor, findPeopleWithCases, freeCases, lockCasesNotFor } from "./free-cases";
import { casesChanged } from "./notify";
import type { Asker } from "./rules";

/**
 * Frees cases of people who may no longer decide them. A change of roles or state does so at once; this catches a case
 * that was given to somebody in the moment in which they lost their rights.
 */
export async function freeStrandedCases(ctx: Context, signal: AbortSignal): Promise<void> {
  demand(ctx, "desk.work");
  for (const personId of await findPeopleWithCases(ctx.db)) {
    if (signal.aborted) return;
    const person = (await findActivePerson(ctx.db, personId)) ?? { personId, roles: [] };
    if ((await findCasesNotFor(ctx.db, person)).length > 0) casesChanged(await freeOf(ctx, person));
  }
}

async function freeOf(ctx: Context, person: Asker): Promise<string[]> {
  return inTransaction(ctx.db, async (tx) => {
    const entries = await freeCases(tx, await lockCasesNotFor(tx, person), person, ctx.now());
    if (entries.length > 0) await appendTrail(ctx, tx, ...entries);
    return entries.map(({ caseId }) => caseId);
  });
}
