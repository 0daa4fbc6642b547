import type { DriftView, DriftWarning } from "@/lib/learning/drift-schema";
import { countText } from "../ui/count";
import { natsText } from "./figure-text";

export const DRIFT_KIND_WORDS: Readonly<Record<DriftWarning["kind"], string>> = {
  loss: "Losses left their band",
  calibration: "Calibration left its band",
};

/** What a warning says, in a sentence or two. */
export function warningWords({ detail }: DriftWarning): string {
  const { direction, recentLabels, meanLoss, promisedLoss } = detail;
  const cost = `The last ${countText(recentLabels)} labels cost ${natsText(meanLoss, 3)} nats each where the scores promised ${natsText(promisedLoss, 3)}`;
  return direction === "worse" ? `${cost}: the scores are too sure.` : `${cost}: the scores are too timid.`;
}

/** Drift in a few words, and whether it is worth a look. */
export function driftStanding({ watched, warmUp, warnings }: DriftView): "warned" | "early" | "steady" {
  if (warnings.some(({ seenAt }) => seenAt === null)) return "warned";
  return watched < warmUp ? "early" : "steady";
}
