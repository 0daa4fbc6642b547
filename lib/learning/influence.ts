import "server-only";
import { setTimeout as sleep } from "node:timers/promises";
import { inArray } from "drizzle-orm";
import type { Database } from "@/db/client";
import { people } from "@/db/schema/people";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { log } from "../log";
import { labelBound } from "../scorer";
import { type HeldScorer, readScorerInUse } from "./held-scorer";
import { claimRun, type DoneRun, endRun, isRested, newestRun, renewRun } from "./influence-run";
import type { InfluenceResult, InfluenceView } from "./influence-schema";
import { reckonInfluence } from "./reckon-influence";
import { lengthOf } from "./scorer-effect";

/** A short log is reckoned while the asker waits; what takes longer is asked for again. */
const WAIT_MS = 1_500;

/**
 * What each person's labels do to the scorer in use. Effects belong to one row of the log: behind it they are reckoned
 * anew in the background, by one server at a time, and the last ones are shown meanwhile.
 */
export async function readInfluence(ctx: Context): Promise<InfluenceView> {
  demand(ctx, "influence.read");
  const held = await readScorerInUse(ctx.db);
  let run = await newestRun(ctx.db);
  if (!isOf(run, held) && isRested(run, ctx.now())) {
    await Promise.race([reckonOnce(ctx, held), sleep(WAIT_MS, undefined, { ref: false })]);
    run = await newestRun(ctx.db);
  }
  const { scorer, logSeq } = held;
  const { distance, formula } = labelBound(scorer.options, scorer.labels);
  return {
    state: isOf(run, held) ? "ready" : "pending",
    logSeq,
    asOfSeq: run?.asOfSeq ?? null,
    computedAt: run?.finishedAt.toISOString() ?? null,
    payments: run?.result.payments ?? null,
    bound: { distance, formula },
    weights: { length: lengthOf(scorer.weights()), bound: scorer.options.weightBound ?? 0 },
    people: run ? await named(ctx.db, run.result.people) : [],
  };
}

const isOf = (run: DoneRun | null, held: HeldScorer): boolean =>
  run !== null && run.scorerId === held.id && run.asOfSeq >= held.logSeq;

/** Reckons once where nobody else is at it. A fault is logged and leaves the run to the next asker. */
async function reckonOnce({ db, now, requestId }: Context, held: HeldScorer): Promise<void> {
  let id: number | null = null;
  try {
    const claimed = await claimRun(db, held, now());
    if (claimed === null) return;
    id = claimed;
    const goesOn = () => renewRun(db, claimed, now());
    await endRun(db, claimed, await reckonInfluence(db, { held, goesOn }), now());
  } catch (error) {
    log.error({ requestId, err: error }, "What people's labels do to the scorer could not be reckoned");
    if (id !== null) await endRun(db, id, null, now()).catch(() => undefined);
  }
}

async function named(db: Database, reckoned: InfluenceResult["people"]): Promise<InfluenceView["people"]> {
  if (reckoned.length === 0) return [];
  const ids = reckoned.map(({ personId }) => personId);
  const rows = await db
    .select({ id: people.id, name: people.name })
    .from(people)
    .where(inArray(people.id, ids));
  const names = new Map(rows.map(({ id, name }) => [id, name]));
  return reckoned.map(({ personId, ...rest }) => ({
    person: { id: personId, name: names.get(personId) ?? "" },
    ...rest,
  }));
}
