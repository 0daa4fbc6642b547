import "server-only";
import { eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases, handOuts } from "@/db/schema/cases";
import { demandPerson } from "../auth/demand";
import type { Context, PersonActor } from "../context";
import { policyInForce } from "../policy/read";
import { appendTrail } from "../trail/append";
import { completeAnswer, ReplayedAnswer, writeOnce } from "../write-once";
import { expiringCandidates, overdueCandidates, rankedCandidates, sampleCandidates } from "./candidates";
import { changeCase, type LockedCase, lockRoomForClaim } from "./locked-case";
import { casesChanged } from "./notify";
import { rankingOf } from "./ranking/ranking";
import { caseView } from "./read";
import { claim, isTakeable } from "./rules";
import type { CaseView } from "./schema";
import { countHandOut, type Share, sharesDue } from "./shares";

/** People who ask at once each find one among so many. */
const CANDIDATES = 24;
const ATTEMPTS = 6;

type Candidates = { expiring: string[]; overdue: string[]; sample: string[]; ranked: string[] };

/** Every candidate was taken by somebody else in the meantime. */
class AllTaken extends Error {}

/**
 * Claims the best case this person may take; null when there is none. Holds about to expire come first; then every
 * k-th hand-out is an overdue case and every m-th a sample; then the person's assigned cases and the list's order.
 * Two people who ask at once get different cases, and neither waits for the other.
 */
export async function takeNextCase(ctx: Context, input: { notThese: string[] }): Promise<CaseView | null> {
  const person = demandPerson(ctx, "desk.work");
  const skip = new Set(input.notThese);
  // Candidates are gathered before the transaction: it must hold no connection while the ranking may need one.
  let candidates = await gather(ctx, person, skip, false);
  for (let attempt = 1; ; attempt++) {
    if (isEmpty(candidates) || attempt > 1) candidates = await gather(ctx, person, skip, true);
    try {
      const caseId = await writeOnce(ctx, (tx) => take(ctx, tx, person, candidates), { complete: false });
      const view = caseId === null ? null : await caseView(ctx, { id: caseId });
      await completeAnswer(ctx, view);
      if (caseId !== null) casesChanged([caseId]);
      return view;
    } catch (error) {
      // A server that stopped right after the hand-out left the case's id where the answer was to stand.
      if (error instanceof ReplayedAnswer && typeof error.answer === "string") {
        return caseView(ctx, { id: error.answer });
      }
      if (!(error instanceof AllTaken) || attempt >= ATTEMPTS) throw error;
    }
  }
}

async function gather(
  ctx: Context,
  asker: PersonActor,
  skip: ReadonlySet<string>,
  poll: boolean,
): Promise<Candidates> {
  const ranking = rankingOf(ctx.db);
  const now = ctx.now();
  const wanted = { asker, now, skip, limit: CANDIDATES };
  if (poll) await ranking.catchUp([], true);
  return ranking.read(now, (view) => ({
    expiring: expiringCandidates(view, wanted),
    overdue: overdueCandidates(view, wanted),
    sample: sampleCandidates(view, wanted),
    ranked: rankedCandidates(view, wanted),
  }));
}

const isEmpty = (candidates: Candidates) =>
  candidates.expiring.length === 0 && candidates.ranked.length === 0;

async function take(
  ctx: Context,
  tx: Tx,
  person: PersonActor,
  candidates: Candidates,
): Promise<string | null> {
  const now = ctx.now();
  if (isEmpty(candidates)) return null;
  const { terms } = await policyInForce(tx, now);
  const count = await lockRoomForClaim(tx, person.personId, now);
  const due = sharesDue(count, terms);
  const found =
    (await lockFirst(tx, candidates.expiring, person, now, "expiring")) ??
    (await lockShare(tx, due, candidates, person, now)) ??
    (await lockFirst(tx, candidates.ranked, person, now, null));
  if (!found) throw new AllTaken();
  const { row, share } = found;
  const claimed = await changeCase(tx, row, claim(row, person, now), now);
  // Holds about to expire come before the shares, and do not use them up.
  if (share !== "expiring") {
    await tx
      .update(handOuts)
      .set(countHandOut(count, terms, share))
      .where(eq(handOuts.personId, person.personId));
  }
  await appendTrail(ctx, tx, {
    act: "case.handed_out",
    subjectKind: "case",
    subjectId: row.id,
    caseId: row.id,
    facts: { revision: claimed.revision, before: row.state, share, lapsedClaimOf: row.claimedBy },
  });
  return row.id;
}

type Found<S> = { row: LockedCase; share: S };

async function lockShare(
  tx: Tx,
  due: readonly Share[],
  candidates: Candidates,
  person: PersonActor,
  now: Date,
): Promise<Found<Share> | null> {
  for (const share of due) {
    const found = await lockFirst(tx, candidates[share], person, now, share);
    if (found) return found;
  }
  return null;
}

/** The first of the cases that nobody else has locked and that is still there to take. */
async function lockFirst<S extends string | null>(
  tx: Tx,
  caseIds: readonly string[],
  person: PersonActor,
  now: Date,
  share: S,
): Promise<Found<S> | null> {
  for (const id of caseIds) {
    const [row] = await tx.select().from(cases).where(eq(cases.id, id)).for("update", { skipLocked: true });
    if (row && isTakeable(row, person, now)) return { row, share };
  }
  return null;
}
