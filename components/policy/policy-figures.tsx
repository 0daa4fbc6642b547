import type { PassedView } from "@/lib/learning/passed-schema";
import { project } from "@/lib/policy/projection";
import type { PolicyView } from "@/lib/policy/schema";
import { countText } from "../ui/count";
import { Figure, FigureRow } from "../ui/figure";
import { signedDecibans } from "../ui/probability";
import { Time } from "../ui/time";
import { perDay, probabilityWords } from "./effect";
import { PassedFigure } from "./passed-figure";

/** The version in force, what its lines make of the recent payments, and what they let through. */
export function PolicyFigures({ view, passed }: { view: PolicyView; passed: PassedView }) {
  const { inForce, reviewDecibans, holdDecibans, recent } = view;
  const { terms } = inForce;
  const projection = project(terms, recent);
  const tooFew = "too few payments yet";
  return (
    <FigureRow>
      <Figure
        label="Version in force"
        value={inForce.version}
        note={
          inForce.effectiveAt && (
            <>
              since <Time at={inForce.effectiveAt} />
            </>
          )
        }
      />
      <Figure
        label="Review line"
        value={signedDecibans(reviewDecibans)}
        unit="decibans"
        note={
          terms.reviewThreshold.kind === "capacity"
            ? `by capacity, now ${probabilityWords(reviewDecibans)}`
            : `fixed at ${probabilityWords(reviewDecibans)}`
        }
      />
      <PassedFigure passed={passed} />
      <Figure
        label="Hold line"
        value={signedDecibans(holdDecibans)}
        unit="decibans"
        note={`at ${probabilityWords(holdDecibans)}`}
      />
      <Figure
        label="Cases a day"
        value={projection ? perDay(projection.alertsPerDay) : "–"}
        note={projection ? `of them ${perDay(projection.holdsPerDay)} above the hold line` : tooFew}
      />
      <Figure label="Capacity" value={countText(terms.dailyCapacity)} unit="a day" />
    </FigureRow>
  );
}
