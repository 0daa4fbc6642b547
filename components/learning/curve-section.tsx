import type { LearningView } from "@/lib/learning/learning-schema";
import { EmptyState } from "../ui/empty-state";
import { HowToRead } from "../ui/how-to-read";
import { Section } from "../ui/section";
import { LossCurve } from "./loss-curve";

const TERMS = [
  {
    term: "Steep",
    means:
      "Where a line climbs faster than before, findings have begun to surprise that scorer: fraud may have changed.",
  },
  {
    term: "Distance",
    means:
      "A scorer is better where its line ends lower. The distance to the best fixed weights is the regret.",
  },
  {
    term: "Best fixed weights",
    means:
      "Reckoned afterwards, knowing all labels: no scorer with unchanging weights could have lost less. It is drawn where the window is the whole log.",
  },
] as const;

/** How losses have added up; needs two labels to draw a line. */
export function CurveSection({ view }: { view: LearningView }) {
  return (
    <Section title="Cumulative loss" lead="What surprise has added up to, label by label.">
      {view.curve.length < 2 ? (
        <EmptyState title="Nothing to draw yet">
          From the second label of this window on, a line for each scorer stands here.
        </EmptyState>
      ) : (
        <>
          <LossCurve view={view} />
          <HowToRead terms={TERMS} />
        </>
      )}
    </Section>
  );
}
