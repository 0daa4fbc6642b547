import "server-only";
import { desc, eq } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { driftWarnings } from "@/db/schema/learning";
import { people } from "@/db/schema/people";
import { scorers } from "@/db/schema/scorers";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import type { DriftKind } from "./codes";
import { againstBaseline } from "./drift-baseline";
import {
  CALIBRATION_WINDOW,
  LABELS_PER_FALSE_WARNING,
  LINES,
  WARM_UP_LABELS,
  watchCalibration,
  watchLoss,
} from "./drift-rules";
import { DriftDetail, type DriftView, type DriftWarning } from "./drift-schema";
import { findLastWarning, readDriftStream, sinceWarning } from "./drift-stream";

const WARNINGS_SHOWN = 50;

/** Where the two statistics stand, and the warnings there have been. */
export async function showDrift(ctx: Context): Promise<DriftView> {
  demand(ctx, "scorer.read");
  const stream = await readDriftStream(ctx.db);
  const labels = stream?.labels ?? [];
  const lastOf = async (kind: DriftKind) => stream && findLastWarning(ctx.db, stream.scorerId, kind);
  const [lastLoss, lastCalibration] = [await lastOf("loss"), await lastOf("calibration")];
  const loss = watchLoss(
    againstBaseline(labels.slice(sinceWarning(labels, lastLoss)), lastLoss?.accepted ?? null),
    false,
  );
  const calibration = watchCalibration(
    againstBaseline(labels.slice(-CALIBRATION_WINDOW), lastCalibration?.accepted ?? null),
    false,
  );
  return {
    watched: labels.length,
    warmUp: WARM_UP_LABELS,
    loss: { value: labels.length > 0 ? loss.value : null, line: LINES.loss },
    calibration: { value: calibration.value, line: LINES.calibration },
    calibrationWindow: CALIBRATION_WINDOW,
    labelsPerFalseWarning: LABELS_PER_FALSE_WARNING,
    warnings: await listWarnings(ctx.db),
  };
}

async function listWarnings(db: Executor): Promise<DriftWarning[]> {
  const rows = await db
    .select({ warning: driftWarnings, scorerName: scorers.name, seenByName: people.name })
    .from(driftWarnings)
    .innerJoin(scorers, eq(scorers.id, driftWarnings.scorerId))
    .leftJoin(people, eq(people.id, driftWarnings.seenBy))
    .orderBy(desc(driftWarnings.raisedAt), desc(driftWarnings.seq))
    .limit(WARNINGS_SHOWN);
  return rows.map(({ warning, scorerName, seenByName }) => ({
    id: warning.id,
    kind: warning.kind,
    scorerName,
    seq: warning.seq,
    raisedAt: warning.raisedAt.toISOString(),
    statistic: warning.statistic,
    line: warning.line,
    detail: DriftDetail.parse(warning.detail),
    seenAt: warning.seenAt?.toISOString() ?? null,
    seenByName,
  }));
}
