import type { ScorerFigures } from "@/lib/learning/learning-schema";
import { EmptyState } from "../ui/empty-state";
import { HowToRead } from "../ui/how-to-read";
import { Section } from "../ui/section";
import { ReliabilityChart } from "./reliability-chart";

/** How far a predicted 20 % is fraud in 20 of 100. */
export function CalibrationSection({ scorers }: { scorers: readonly ScorerFigures[] }) {
  const judged = scorers.filter(({ calibration }) => calibration.length > 0);
  return (
    <Section
      title="Calibration"
      lead="Of payments predicted to be fraudulent with 20 %, one in five should be. Marks on the dotted diagonal hold what they promise."
    >
      {judged.length === 0 ? (
        <EmptyState title="No labels in this window yet">
          Once reviewers have decided cases, what was predicted stands here against what they found.
        </EmptyState>
      ) : (
        <div className="grid gap-x-10 gap-y-8 md:grid-cols-2 xl:grid-cols-3">
          {judged.map((scorer) => (
            <ReliabilityChart key={scorer.id} scorer={scorer} />
          ))}
        </div>
      )}
      {judged.length > 0 && (
        <HowToRead
          terms={[
            {
              term: "Above the diagonal",
              means: "More fraud was found than predicted: the scorer was too trusting.",
            },
            { term: "Below it", means: "Less was found than predicted: it was too suspicious." },
            {
              term: "Bar",
              means:
                "95 % interval of the share found. The mark is hollow where the bar does not reach the diagonal.",
            },
            {
              term: "Brier",
              means: "Mean squared distance of predictions from what was found; 0 is perfect.",
            },
            {
              term: "z",
              means: "Spiegelhalter's z. Between −2 and +2 what was found is as predicted but for chance.",
            },
          ]}
        />
      )}
    </Section>
  );
}
