import "server-only";
import type { Context, PersonActor } from "../context";
import { log } from "../log";
import type { Step } from "../scorer";
import { expiringCandidates, rankedCandidates } from "./candidates";
import { type Movement, noMovement } from "./ranking/movement";
import { rankingOf } from "./ranking/ranking";

export type Learned = {
  /** Of the scorer once the act was committed. */
  version: number;
  /** Learning steps of the act; none where no verdict was a label. */
  steps: readonly Step[];
  decided: readonly string[];
  /** Cases that wait again. */
  restored?: readonly string[];
  /** True when the label log was re-run, so that every case has to be computed anew. */
  rebuilt?: boolean;
};

/**
 * Brings the waiting cases forward after a commit that learned, and tells what moved.
 * The commit stands whatever happens here, so a failure is logged and answers null.
 */
export async function applyLearned(ctx: Context, learned: Learned): Promise<Movement | null> {
  const ranking = rankingOf(ctx.db);
  try {
    await ranking.catchUp([...learned.decided, ...(learned.restored ?? [])]);
    if (learned.steps.length === 0 && !learned.rebuilt) return noMovement();
    return ranking.movementOf(learned.version);
  } catch (error) {
    log.error({ requestId: ctx.requestId, err: error }, "The ranking could not be brought forward");
    return null;
  }
}

/** The best case this person may take now, as the list has it; taking it is `next`'s or `claim`'s business. */
export async function nextFor(ctx: Context, person: PersonActor): Promise<{ caseId: string } | null> {
  const now = ctx.now();
  const wanted = { asker: person, now, skip: new Set<string>(), limit: 1 };
  try {
    const [caseId] = await rankingOf(ctx.db).read(now, (view) => [
      ...expiringCandidates(view, wanted),
      ...rankedCandidates(view, wanted),
    ]);
    return caseId ? { caseId } : null;
  } catch (error) {
    log.error({ requestId: ctx.requestId, err: error }, "The next case could not be found");
    return null;
  }
}
