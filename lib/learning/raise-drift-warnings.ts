import "server-only";
import { eq, max } from "drizzle-orm";
import type { Database } from "@/db/client";
import { driftWarnings } from "@/db/schema/learning";
import { labelLog, scorers } from "@/db/schema/scorers";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { newId } from "../new-id";
import { appendTrail } from "../trail/append";
import { DRIFT_KINDS, type DriftKind } from "./codes";
import { againstBaseline } from "./drift-baseline";
import { type Crossing, type LivedLabel, promisedLoss, toldProbability, WATCHES } from "./drift-rules";
import type { DriftDetail } from "./drift-schema";
import {
  type DriftStream,
  findLastWarning,
  readDriftStream,
  readVectors,
  sinceWarning,
} from "./drift-stream";
import { movedSignals } from "./moved-signals";
import { scoreShift } from "./score-shift";

/** Labels since the change that are looked at, and as many before them as give them something to be compared with. */
const [FEWEST_RECENT, MOST_RECENT, MOST_BEFORE] = [100, 500, 2_000];

/** Last row of the log that this process has looked at: without a newer one there is nothing to find. */
const lookedAt = new WeakMap<Database, number>();

/** Raises a warning for each statistic that has left its band since the last one: once for every time that it does. */
export async function raiseDriftWarnings(ctx: Context): Promise<void> {
  demand(ctx, "scorer.read");
  const newest = await newestRow(ctx.db);
  if (newest === lookedAt.get(ctx.db)) return;
  const stream = await readDriftStream(ctx.db);
  if (!stream) return;
  for (const kind of DRIFT_KINDS) {
    // A long import may hold more than one.
    let raised = true;
    while (raised) raised = await raiseNext(ctx, stream, kind);
  }
  lookedAt.set(ctx.db, newest);
}

async function newestRow(db: Database): Promise<number> {
  const [row] = await db.select({ seq: max(labelLog.seq) }).from(labelLog);
  return row?.seq ?? 0;
}

async function raiseNext(ctx: Context, stream: DriftStream, kind: DriftKind): Promise<boolean> {
  const last = await findLastWarning(ctx.db, stream.scorerId, kind);
  const start = sinceWarning(stream.labels, last);
  const isQuiet = last === null || last.seenAt !== null;
  const watched = againstBaseline(stream.labels.slice(start), last?.accepted ?? null);
  const { crossing } = WATCHES[kind](watched, isQuiet);
  if (!crossing) return false;
  const detail = await detailOf(ctx, stream.labels, crossing, start);
  return inTransaction(ctx.db, async (tx) => {
    await tx.select({ id: scorers.id }).from(scorers).where(eq(scorers.id, stream.scorerId)).for("update");
    const now = await findLastWarning(tx, stream.scorerId, kind);
    // Another server was quicker, or somebody has just seen the last one.
    if (now?.id !== last?.id || now?.seenAt?.getTime() !== last?.seenAt?.getTime()) return false;
    const id = newId();
    const { seq, statistic, line } = crossing;
    await tx.insert(driftWarnings).values({
      id,
      kind,
      scorerId: stream.scorerId,
      seq,
      raisedAt: ctx.now(),
      statistic,
      line,
      detail,
    });
    await appendTrail(ctx, tx, {
      act: "scorer.drift_warned",
      subjectKind: "scorer",
      subjectId: stream.scorerId,
      facts: {
        warningId: id,
        kind,
        logSeq: seq,
        statistic,
        line,
        signals: detail.movedSignals.map(({ key }) => key),
      },
    });
    return true;
  });
}

async function detailOf(
  ctx: Context,
  labels: readonly LivedLabel[],
  crossing: Crossing,
  start: number,
): Promise<DriftDetail> {
  const end = start + crossing.index + 1;
  const count = Math.min(MOST_RECENT, Math.max(FEWEST_RECENT, end - start - crossing.since));
  const from = Math.max(0, end - count);
  const recent = labels.slice(from, end);
  const before = labels.slice(Math.max(0, from - MOST_BEFORE), from);
  return {
    direction: crossing.statistic > 0 ? "worse" : "better",
    recentLabels: recent.length,
    labelsBefore: before.length,
    meanLoss: meanOf(recent.map(({ loss }) => loss)),
    promisedLoss: meanOf(recent.map(({ loss }) => promisedLoss(loss))),
    scoreShift: scoreShift(recent.map(toldProbability), before.map(toldProbability)),
    movedSignals: movedSignals(await vectorsOf(ctx, recent), await vectorsOf(ctx, before)),
    accepted: null,
  };
}

async function vectorsOf(ctx: Context, labels: readonly LivedLabel[]): Promise<Float64Array[]> {
  const [first, last] = [labels.at(0), labels.at(-1)];
  return first && last ? readVectors(ctx.db, first.seq, last.seq) : [];
}

const meanOf = (values: readonly number[]): number =>
  values.reduce((sum, value) => sum + value, 0) / values.length;
