import "server-only";
import { eq, sql } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { candidateLosses } from "@/db/schema/learning";
import { scorerSnapshots, scorers } from "@/db/schema/scorers";
import type { Context } from "../context";
import { conflict } from "../errors";
import { newId } from "../new-id";
import { policyInForce } from "../policy/read";
import { takeNewCut } from "../policy/thresholds";
import { appendTrail } from "../trail/append";
import { lockCandidate } from "./candidate";
import { type HeldScorer, lockScorerInUse } from "./held-scorer";
import { takeInRows } from "./take-in";

/** Decisions wait while it catches up; further behind, it has to come closer by itself first. */
const MOST_BEHIND = 1_000;

/**
 * Puts a candidate in use from the next version on. The scorer it takes the place of is retired with its last version,
 * so that a score it gave can still be derived, and runs on beside it as a candidate of its own. The review line is
 * taken anew, since the same probability means another number of cases under another scorer.
 * @throws KnownError conflict when the candidate no longer runs, is far behind or reads other signals
 */
export async function promoteScorer(ctx: Context, tx: Tx, { scorerId }: { scorerId: string }): Promise<void> {
  const now = ctx.now();
  const held = await lockScorerInUse(tx);
  const candidate = await lockCandidate(tx, scorerId);
  if (!candidate) throw conflict("No candidate of this id runs any more");
  if (candidate.signalSetVersion !== held.signalSetVersion)
    throw conflict("This candidate reads another set of signals than the scorer in use");
  const behind = held.logSeq - candidate.logSeq;
  if (behind > MOST_BEHIND)
    throw conflict(`This candidate has ${behind} rows of the label log to catch up with first`);
  while (candidate.logSeq < held.logSeq) await takeInRows(tx, candidate, now, MOST_BEHIND);
  const demotedId = await demote(tx, held, now);
  const version = held.version + 1;
  await tx
    .update(scorers)
    .set({
      role: "in_use",
      version,
      cumulativeLoss: held.cumulativeLoss,
      carriedLoss: held.cumulativeLoss - candidate.cumulativeLoss,
      changedAt: now,
    })
    .where(eq(scorers.id, scorerId));
  await takeNewCut(tx, await policyInForce(tx, now), now, {
    scorer: candidate.scorer,
    version,
    signals: candidate.signals,
  });
  await appendTrail(
    ctx,
    tx,
    {
      act: "scorer.demoted",
      subjectKind: "scorer",
      subjectId: held.id,
      facts: { version: held.version, runsOnAs: demotedId, by: scorerId },
    },
    {
      act: "scorer.promoted",
      subjectKind: "scorer",
      subjectId: scorerId,
      facts: { version, logSeq: held.logSeq, labels: candidate.scorer.labels, replaces: held.id },
    },
  );
}

/**
 * Retires the scorer in use and lets a copy run on: with its snapshots, and with what it predicted as a candidate.
 * What it predicted in use is in the label log.
 */
async function demote(tx: Tx, held: HeldScorer, now: Date): Promise<string> {
  const [row] = await tx.select().from(scorers).where(eq(scorers.id, held.id));
  if (!row) throw new Error("The scorer in use is not there");
  const { inUse: _, ...kept } = row;
  const id = newId();
  await tx.update(scorers).set({ role: "retired", changedAt: now }).where(eq(scorers.id, held.id));
  await tx.insert(scorers).values({
    ...kept,
    id,
    role: "candidate",
    version: 0,
    cumulativeLoss: row.cumulativeLoss - (row.carriedLoss ?? 0),
    carriedLoss: null,
    changedAt: now,
  });
  await tx.execute(sql`
    insert into ${scorerSnapshots} (scorer_id, place, state)
    select ${id}, place, state from ${scorerSnapshots} where scorer_id = ${held.id}`);
  await tx.execute(sql`
    insert into ${candidateLosses} (scorer_id, seq, probability, loss)
    select ${id}, seq, probability, loss from ${candidateLosses} where scorer_id = ${held.id}`);
  return id;
}
