import { z } from "zod";
import { DRIFT_KINDS } from "./codes";

const Instant = z.iso.datetime();

/** A signal whose readings lie elsewhere than before. */
export const MovedSignal = z.strictObject({
  key: z.string(),
  name: z.string(),
  /** Mean over the recent labels minus mean over those before, in standard deviations. */
  shift: z.number(),
  meanBefore: z.number(),
  meanRecent: z.number(),
});
export type MovedSignal = z.infer<typeof MovedSignal>;

/** Shift in nats of the log odds told that made labels as promised when somebody saw a warning; later ones are held against it. */
export const DriftBaseline = z.strictObject({ shift: z.number(), labels: z.int() });
export type DriftBaseline = z.infer<typeof DriftBaseline>;

/** What a warning rests on, as it is kept. */
export const DriftDetail = z.strictObject({
  /** `worse`: labels cost more than the scores promised, so they were too sure. `better`: less, so they were too timid. */
  direction: z.enum(["worse", "better"]),
  /** Labels since the change began, as far as can be told, or in the window. */
  recentLabels: z.int(),
  /** Labels before them that they are compared with. */
  labelsBefore: z.int(),
  /** Mean loss of the recent labels in nats, and what their scores promised. */
  meanLoss: z.number(),
  promisedLoss: z.number(),
  /** How far the scores themselves have moved: population stability index over ten bins; null with too few labels. */
  scoreShift: z.number().nullable(),
  movedSignals: z.array(MovedSignal),
  /** Taken when it was seen; null before, and where there were too few labels. */
  accepted: DriftBaseline.nullable(),
});
export type DriftDetail = z.infer<typeof DriftDetail>;

export const DriftWarning = z.strictObject({
  id: z.uuid(),
  kind: z.enum(DRIFT_KINDS),
  scorerName: z.string(),
  seq: z.int(),
  raisedAt: Instant,
  statistic: z.number(),
  line: z.number(),
  detail: DriftDetail,
  seenAt: Instant.nullable(),
  seenByName: z.string().nullable(),
});
export type DriftWarning = z.infer<typeof DriftWarning>;

/** A statistic as it stands now, and the lines it must stay within. */
export const DriftGauge = z.strictObject({
  /** Between −line and line while in its band. Null with too few labels. */
  value: z.number().nullable(),
  line: z.number(),
});

export const DriftView = z.strictObject({
  /** Labels that are watched: the newest decisions on reviewed cases since the scorer in use began, the warm-up aside. */
  watched: z.int(),
  /** Labels a scorer learns from before it is watched. */
  warmUp: z.int(),
  /** Sum of losses beyond what the scores promised, in nats of evidence: positive too sure, negative too timid. */
  loss: DriftGauge,
  /** Spiegelhalter's z over the last `calibrationWindow` labels. */
  calibration: DriftGauge,
  calibrationWindow: z.int(),
  /** On average no more than one false warning of either kind in so many labels. */
  labelsPerFalseWarning: z.int(),
  /** Newest first. */
  warnings: z.array(DriftWarning),
});
export type DriftView = z.infer<typeof DriftView>;

export const DriftInput = z.strictObject({});

export const DriftSeenInput = z.strictObject({ id: z.uuid() });
export type DriftSeenInput = z.infer<typeof DriftSeenInput>;
