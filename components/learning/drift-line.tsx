import type { DriftView } from "@/lib/learning/drift-schema";
import { countText } from "../ui/count";
import { Time } from "../ui/time";
import { DRIFT_KIND_WORDS, driftStanding } from "./drift-words";
import type { DriftLine } from "./learning-figures";

/** Drift among the figures: a sign and a word, so that colour is not needed. */
export function driftLine(view: DriftView | undefined, failed: boolean): DriftLine {
  if (failed) return { value: "–", note: "could not be read; see below" };
  if (!view) return { value: "…", note: "being read" };
  const { warnings, watched, warmUp } = view;
  switch (driftStanding(view)) {
    case "warned": {
      const open = warnings.filter(({ seenAt }) => seenAt === null);
      const newest = open[0];
      return {
        value: open.length === 1 ? "▲ warning" : `▲ ${open.length} warnings`,
        note: newest && (
          <>
            {DRIFT_KIND_WORDS[newest.kind].toLowerCase()}, <Time at={newest.raisedAt} as="short" />
          </>
        ),
      };
    }
    case "early":
      return {
        value: "not yet",
        note: `watched from ${countText(warmUp)} labels on; ${countText(watched)} so far`,
      };
    case "steady":
      return {
        value: "✓ steady",
        note: `losses and calibration in their bands over ${countText(watched)} labels`,
      };
  }
}
