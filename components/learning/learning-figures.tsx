import type { ReactNode } from "react";
import type { LearningView } from "@/lib/learning/learning-schema";
import { countText } from "../ui/count";
import { Figure, FigureRow } from "../ui/figure";
import { Time } from "../ui/time";
import { labelsText, lossText, natsText, signedNats } from "./figure-text";

/** Drift in a line: a sign and a word, and what they rest on. */
export type DriftLine = { value: string; note: ReactNode };

type LearningFiguresProps = { view: LearningView; drift: DriftLine };

/** How the scorer in use stands. */
export function LearningFigures({ view, drift }: LearningFiguresProps) {
  const { scorers, hindsight, window } = view;
  const inUse = scorers.find(({ role }) => role === "in_use");
  if (!inUse) return null;
  const { labels, cumulativeLoss, meanLoss, regret, certificate } = inUse;
  return (
    <FigureRow>
      <Figure
        label="Decisions learned from"
        value={countText(labels)}
        note={labels === 0 ? "untrained: scores rest on the base rate" : `by “${inUse.name}”, in use`}
      />
      <Figure
        label="Cumulative loss"
        value={meanLoss === null ? "–" : natsText(cumulativeLoss)}
        {...(meanLoss !== null && { unit: "nats" })}
        note={
          meanLoss === null
            ? "no label in this window yet"
            : `${lossText(meanLoss)} per label, over ${labelsText(window.labels)}`
        }
      />
      <Figure
        label="Regret to the best fixed weights"
        value={regret === null ? "not yet" : signedNats(regret.value)}
        {...(regret !== null && { unit: "nats" })}
        note={
          regret === null ? (
            "reckoned in the background"
          ) : (
            <>
              over {labelsText(regret.labels)}
              {hindsight && (
                <>
                  , reckoned <Time at={hindsight.computedAt} as="short" />
                </>
              )}
              {certificate !== null && <>; as the log stands at most {natsText(certificate)}</>}
            </>
          )
        }
      />
      <Figure label="Drift" {...drift} />
    </FigureRow>
  );
}
