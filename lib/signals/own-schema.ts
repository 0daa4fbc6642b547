import { z } from "zod";
import { OWN_SIGNAL_STATES } from "../learning/codes";
import { LONGEST_FORMULA } from "./formula-text";

const Id = z.uuid();
const Instant = z.iso.datetime();

/** Places behind the catalogue's coordinates are never given again, so there are only so many. */
export const MOST_OWN_SIGNALS = 24;

const fields = {
  name: z.string().trim().min(1, "needs a name").max(80),
  /** What it measures and why it tells, for reviewers. */
  sentence: z.string().trim().min(1, "needs a sentence for reviewers").max(400),
  formula: z.string().max(LONGEST_FORMULA),
  /** Scaled to (value − middle) / reach, clipped to [−1, 1]. */
  middle: z.number().min(-1e15).max(1e15),
  reach: z.number().min(1e-9, "must be above 0").max(1e15),
};

export const DraftSignalInput = z.strictObject(fields);
export type DraftSignalInput = z.infer<typeof DraftSignalInput>;

export const ChangeSignalInput = z.strictObject({ id: Id, revision: z.int(), ...fields });
export type ChangeSignalInput = z.infer<typeof ChangeSignalInput>;

export const ArchiveSignalInput = z.strictObject({ id: Id, revision: z.int() });
export type ArchiveSignalInput = z.infer<typeof ArchiveSignalInput>;

export const SwitchSignalInput = z.strictObject({
  id: Id,
  to: z.enum(["on", "off"]),
  reason: z.string().trim().min(1, "needs a reason").max(2000),
});
export type SwitchSignalInput = z.infer<typeof SwitchSignalInput>;

export const OwnSignalView = z.strictObject({
  signalId: Id,
  key: z.string(),
  name: z.string(),
  sentence: z.string(),
  formula: z.string(),
  /** Fields and attributes that the formula reads. */
  needs: z.array(z.string()),
  middle: z.number(),
  reach: z.number(),
  state: z.enum(OWN_SIGNAL_STATES),
  revision: z.int(),
  /** In nats at a scaled reading of 1; null unless it is on. */
  weight: z.number().nullable(),
  /** Once it has been on, its formula stands for good: scores rest on it. */
  mayEdit: z.boolean(),
  /** A proposal to switch it that waits for a second person. */
  waiting: z
    .strictObject({ approvalId: Id, to: z.enum(["on", "off"]), proposedBy: z.string(), proposedAt: Instant })
    .nullable(),
  createdBy: z.string(),
  changedAt: Instant,
});
export type OwnSignalView = z.infer<typeof OwnSignalView>;

export const CatalogueSignalView = z.strictObject({
  key: z.string(),
  name: z.string(),
  sentence: z.string(),
  /** One for each coordinate: its scale first, then its hinges. */
  formulas: z.array(z.string()),
  needs: z.array(z.string()),
  /** In the same order, in nats at a reading of 1. */
  weights: z.array(z.number()),
});
export type CatalogueSignalView = z.infer<typeof CatalogueSignalView>;

export const SignalsView = z.strictObject({
  signalSetVersion: z.int(),
  scorerVersion: z.int(),
  catalogue: z.array(CatalogueSignalView),
  own: z.array(OwnSignalView),
  /** How many more may still be defined. */
  room: z.int(),
});
export type SignalsView = z.infer<typeof SignalsView>;

export const SignalsInput = z.strictObject({});

export const FormulaProblemView = z.strictObject({
  message: z.string(),
  /** First character, counted from 0, and how many; null where no place can be named. */
  at: z.int().nullable(),
  length: z.int(),
});

export const SignalPreviewInput = z.strictObject({
  formula: z.string().max(LONGEST_FORMULA),
  /** Without them the suggested scale is shown. */
  middle: z.coerce.number().optional(),
  reach: z.coerce.number().positive("must be above 0").optional(),
});
export type SignalPreviewInput = z.infer<typeof SignalPreviewInput>;

export const SignalFigures = z.strictObject({
  /** Newest payments looked at, and in how many of them it is available. */
  payments: z.int(),
  available: z.int(),
  /** Of the values, unscaled; null where none is available. */
  values: z.strictObject({ min: z.number(), median: z.number(), max: z.number() }).nullable(),
  /** The median, and the farther of the 1 % and 99 % quantiles from it. */
  suggested: z.strictObject({ middle: z.number(), reach: z.number() }).nullable(),
  /** The scale that the figures below are for. */
  scale: z.strictObject({ middle: z.number(), reach: z.number() }).nullable(),
  /** Scaled values in equal steps from −1 to 1. */
  histogram: z.array(z.int()),
  samples: z.array(z.strictObject({ externalId: z.string(), value: z.number().nullable() })),
  /** Means of scaled values over the newest labelled payments; null where either kind is missing. */
  labelled: z
    .strictObject({
      fraudulent: z.strictObject({ count: z.int(), mean: z.number() }),
      legitimate: z.strictObject({ count: z.int(), mean: z.number() }),
      difference: z.number(),
    })
    .nullable(),
});
export type SignalFigures = z.infer<typeof SignalFigures>;

export const SignalPreview = z.strictObject({
  problem: FormulaProblemView.nullable(),
  needs: z.array(z.string()),
  figures: SignalFigures.nullable(),
});
export type SignalPreview = z.infer<typeof SignalPreview>;
