import "server-only";
import type { Tx } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { labelLog, scorerSnapshots } from "@/db/schema/scorers";
import type { LabelKind } from "../decisions/codes";
import type { Label, Step } from "../scorer";
import type { HeldScorer } from "./held-scorer";

/** A snapshot after every so many labels bounds what an undo has to fold again. */
const SNAPSHOT_EVERY = 200;

export type LabelSource = {
  kind: LabelKind;
  transactionId: string;
  caseId: string | null;
  decisionId: string | null;
  outcomeId: string | null;
  personId: string | null;
};

export type LearnedLabel = { loss: number; logit: number; step: Step; seq: number };

/**
 * Advances the held scorer by one label and appends it to the log at a place of its own.
 * The caller holds the scorer's lock and calls `saveScorer` when it is done.
 * @param vector signals as they were scored, fitted to those that the scorer reads (`fitVector`)
 */
export async function learnLabel(
  tx: Tx,
  held: HeldScorer,
  now: Date,
  source: LabelSource,
  vector: Float64Array,
  label: Label,
): Promise<LearnedLabel> {
  const weight = 1;
  const { loss, logit, step } = held.scorer.learn(vector, label, weight);
  held.logSeq += 1;
  held.version += 1;
  held.cumulativeLoss += loss;
  const seq = held.logSeq;
  await tx.insert(labelLog).values({
    ...source,
    seq,
    label,
    weight,
    vector: vectorToBytes(vector),
    signalSetVersion: held.signalSetVersion,
    loss,
    scorerVersion: held.version,
    at: now,
  });
  if (isSnapshotDue(held.scorer.labels)) await keepSnapshot(tx, held.id, seq, held.scorer.snapshot());
  return { loss, logit, step, seq };
}

export const isSnapshotDue = (labels: number): boolean => labels > 0 && labels % SNAPSHOT_EVERY === 0;

export async function keepSnapshot(
  tx: Tx,
  scorerId: string,
  place: number,
  state: Uint8Array,
): Promise<void> {
  await tx
    .insert(scorerSnapshots)
    .values({ scorerId, place, state: Buffer.from(state) })
    .onDuplicateKeyUpdate({ set: { state: Buffer.from(state) } });
}
