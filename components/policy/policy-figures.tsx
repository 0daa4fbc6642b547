import { project } from "@/lib/policy/projection";
import type { PolicyView } from "@/lib/policy/schema";
import { countText } from "../ui/count";
import { Figure, FigureRow } from "../ui/figure";
import { signedDecibans } from "../ui/probability";
import { Time } from "../ui/time";
import { perDay, probabilityWords } from "./effect";

/** The version in force and what its lines make of the recent payments. */
export function PolicyFigures({ view }: { view: PolicyView }) {
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
