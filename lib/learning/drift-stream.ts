import "server-only";
import { and, asc, between, desc, eq, gt, isNotNull, isNull, max } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import { driftWarnings } from "@/db/schema/learning";
import { labelLog, scorers } from "@/db/schema/scorers";
import type { DriftKind } from "./codes";
import { type LivedLabel, WARM_UP_LABELS } from "./drift-rules";
import { type DriftBaseline, DriftDetail } from "./drift-schema";

/** Older labels say nothing about today, and cost every look: both statistics have forgotten them long ago. */
const NEWEST_LABELS = 6_000;
/** The optimizer would rather take every row without a place, and sort them. */
const IN_ORDER = { forceIndex: "PRIMARY" };

/**
 * Labels whose outcome was open when the scorer in use predicted it: decisions on reviewed cases, at their first
 * place. Which cases are reviewed depends on the scores, but not on what they turn out to be, so the scorer's own
 * promise holds among them. Outcomes are left out: only fraud is ever reported, whatever was predicted.
 */
const watchable = and(eq(labelLog.kind, "decision"), isNull(labelLog.place), isNotNull(labelLog.loss));

export type DriftStream = { scorerId: string; scorerName: string; labels: LivedLabel[] };

/** What the scorer in use has lived since it took its place, oldest first, the installation's warm-up left out. */
export async function readDriftStream(db: Executor): Promise<DriftStream | null> {
  const [scorer] = await db
    .select({ id: scorers.id, name: scorers.name })
    .from(scorers)
    .where(eq(scorers.inUse, 1))
    .limit(1);
  if (!scorer) return null;
  const from = Math.max(await lastRowOfWarmUp(db), await lastRowBeforeIt(db));
  const rows = await db
    .select({ seq: labelLog.seq, at: labelLog.at, label: labelLog.label, loss: labelLog.loss })
    .from(labelLog, IN_ORDER)
    .where(and(watchable, gt(labelLog.seq, from)))
    .orderBy(desc(labelLog.seq))
    .limit(NEWEST_LABELS);
  const labels = rows.reverse().map(({ loss, ...row }) => ({ ...row, loss: loss as number }));
  return { scorerId: scorer.id, scorerName: scorer.name, labels };
}

async function lastRowOfWarmUp(db: Executor): Promise<number> {
  const [row] = await db
    .select({ seq: labelLog.seq })
    .from(labelLog, IN_ORDER)
    .where(watchable)
    .orderBy(asc(labelLog.seq))
    .limit(1)
    .offset(WARM_UP_LABELS - 1);
  return row?.seq ?? Number.MAX_SAFE_INTEGER;
}

/** What the scorers before it lived says nothing about this one, and has been warned of in their time. */
async function lastRowBeforeIt(db: Executor): Promise<number> {
  const [row] = await db
    .select({ seq: max(scorers.logSeq) })
    .from(scorers)
    .where(eq(scorers.role, "retired"));
  return row?.seq ?? 0;
}

/** Vectors of the watched labels in the rows from..to of the log. */
export async function readVectors(db: Executor, fromSeq: number, toSeq: number): Promise<Float64Array[]> {
  const rows = await db
    .select({ vector: labelLog.vector })
    .from(labelLog, IN_ORDER)
    .where(and(watchable, between(labelLog.seq, fromSeq, toSeq)))
    .orderBy(asc(labelLog.seq));
  return rows.map(({ vector }) => bytesToVector(vector));
}

/** `accepted` is of the newest warning that was seen, which need not be the last one. */
export type LastWarning = { id: string; seq: number; seenAt: Date | null; accepted: DriftBaseline | null };

export async function findLastWarning(
  db: Executor,
  scorerId: string,
  kind: DriftKind,
): Promise<LastWarning | null> {
  const ofKind = and(eq(driftWarnings.scorerId, scorerId), eq(driftWarnings.kind, kind));
  const [row] = await db
    .select({ id: driftWarnings.id, seq: driftWarnings.seq, seenAt: driftWarnings.seenAt })
    .from(driftWarnings)
    .where(ofKind)
    .orderBy(desc(driftWarnings.seq))
    .limit(1);
  if (!row) return null;
  const [seen] = await db
    .select({ detail: driftWarnings.detail })
    .from(driftWarnings)
    .where(and(ofKind, isNotNull(driftWarnings.seenAt)))
    .orderBy(desc(driftWarnings.seq))
    .limit(1);
  return { ...row, accepted: seen ? DriftDetail.parse(seen.detail).accepted : null };
}

/** Position of the first label that counts since the last warning: after it, and after it was seen. */
export function sinceWarning(labels: readonly LivedLabel[], last: LastWarning | null): number {
  if (!last) return 0;
  const from = labels.findIndex(({ seq, at }) => seq > last.seq && (!last.seenAt || at > last.seenAt));
  return from < 0 ? labels.length : from;
}
