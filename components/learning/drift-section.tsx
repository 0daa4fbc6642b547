"use client";
import type { UseQueryResult } from "@tanstack/react-query";
import type { DriftView } from "@/lib/learning/drift-schema";
import type { ApiProblem } from "../api";
import { countText } from "../ui/count";
import { EmptyState } from "../ui/empty-state";
import { HowToRead } from "../ui/how-to-read";
import { Section } from "../ui/section";
import { DriftGauge } from "./drift-gauge";
import { LateView } from "./late-view";
import { WarningTable } from "./warning-table";

type DriftSectionProps = {
  query: UseQueryResult<DriftView, ApiProblem>;
  mayManage: boolean;
  onSeen: () => void;
};

/** Whether what is found is still as the scores promise. */
export function DriftSection({ query, mayManage, onSeen }: DriftSectionProps) {
  return (
    <Section
      title="Drift"
      lead="Whether what reviewers find is still as the scores promise, or fraud has changed."
    >
      <LateView query={query} lines={6}>
        {(view) => (
          <>
            <Gauges view={view} />
            {view.warnings.length === 0 ? (
              <EmptyState title="No warning so far">
                {view.watched === 0
                  ? `Labels are watched after the first ${countText(view.warmUp)}.`
                  : "A warning stands here with the signals that moved, once a statistic leaves its band."}
              </EmptyState>
            ) : (
              <WarningTable warnings={view.warnings} mayManage={mayManage} onSeen={onSeen} />
            )}
            <HowToRead terms={termsOf(view)} />
          </>
        )}
      </LateView>
    </Section>
  );
}

function Gauges({ view: { loss, calibration, calibrationWindow } }: { view: DriftView }) {
  return (
    <div className="mb-5 grid gap-x-10 gap-y-5 md:grid-cols-2">
      <DriftGauge
        name="Loss"
        means="What labels cost beyond what the scores promised, gathered up."
        gauge={loss}
        ends={["too timid", "too sure"]}
      />
      <DriftGauge
        name="Calibration"
        means={`Fraud found against fraud predicted, over the last ${countText(calibrationWindow)} labels.`}
        gauge={calibration}
        ends={["less fraud than predicted", "more than predicted"]}
      />
    </div>
  );
}

const termsOf = ({ labelsPerFalseWarning }: DriftView) => [
  {
    term: "Band",
    means: `While nothing changes, a statistic leaves its band by chance no more than once in ${countText(labelsPerFalseWarning)} labels.`,
  },
  {
    term: "Loss",
    means:
      "Every score promises how surprised it expects to be. A cumulative sum gathers what findings cost beyond that, and falls back to zero while the promise is kept.",
  },
  { term: "Calibration", means: "Spiegelhalter's z: findings against predictions, in standard deviations." },
  {
    term: "Seen",
    means:
      "Saying that a warning was seen takes how many findings were fraud, against what was predicted, as known. From then on only a departure from that is warned of.",
  },
  {
    term: "Signals that moved",
    means:
      "Signals whose readings lie elsewhere than before, in standard deviations (sd) of what they were. They say where to look, not what is at fault.",
  },
];
