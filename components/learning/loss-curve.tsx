"use client";
import { useState } from "react";
import type { CurvePoint, LearningView } from "@/lib/learning/learning-schema";
import { ChartData } from "../ui/chart-data";
import { ChoiceSet, Radio } from "../ui/choice";
import { Time } from "../ui/time";
import { columnsFor } from "./curve-columns";
import { natsText, signedNats } from "./figure-text";
import { LineEnds, LOOKS } from "./line-ends";
import { type LossLine, lossChart, type Reckoning, spreadPlaces } from "./loss-lines";

const HEIGHT_REM = 20;
/** A name and its figure at the end of a line. */
const NAME_REM = 2.4;

type LossCurveProps = { view: LearningView };

/** What each scorer has lost so far, label by label, beside the best that fixed weights could have done. */
export function LossCurve({ view: { curve, scorers } }: LossCurveProps) {
  const [reckoning, setReckoning] = useState<Reckoning>("total");
  const { lines, ticks } = lossChart(curve, scorers, reckoning);
  const say = reckoning === "total" ? natsText : signedNats;
  const places = spreadPlaces(
    lines.map(({ points }) => points.at(-1)?.y ?? 0),
    NAME_REM / HEIGHT_REM,
  );
  return (
    <figure>
      {scorers.length > 1 && (
        <div className="mb-4">
          <ChoiceSet legend="Drawn">
            <div className="flex flex-wrap gap-x-5 gap-y-1">
              <Radio
                name="reckoning"
                label="All that was lost"
                checked={reckoning === "total"}
                onChange={() => setReckoning("total")}
              />
              <Radio
                name="reckoning"
                label="Difference from the scorer in use"
                checked={reckoning === "difference"}
                onChange={() => setReckoning("difference")}
              />
            </div>
          </ChoiceSet>
        </div>
      )}
      <div
        className="grid grid-cols-[auto_1fr_7.5rem] sm:grid-cols-[auto_1fr_13rem]"
        style={{ gridTemplateRows: `${HEIGHT_REM}rem auto` }}
      >
        <HeightScale ticks={ticks} />
        <div className="relative">
          <svg
            role="img"
            aria-label={`Loss in nats at the end: ${lines.map(({ name, last }) => `${name} ${say(last)}`).join(", ")}`}
            viewBox="0 0 1000 1000"
            preserveAspectRatio="none"
            className="absolute inset-0 size-full overflow-visible"
          >
            {ticks.map(({ value, y }) => (
              <path
                key={value}
                d={`M0 ${1000 - y * 1000}H1000`}
                vectorEffect="non-scaling-stroke"
                className={value === 0 ? "stroke-edge" : "stroke-rule"}
              />
            ))}
            {lines
              .filter(({ look }) => look === "hindsight")
              .map((line) => (
                <path
                  key={line.id}
                  d={marksOf(line)}
                  vectorEffect="non-scaling-stroke"
                  strokeWidth={6}
                  strokeLinecap="round"
                  className={LOOKS.hindsight.stroke}
                />
              ))}
            {lines.toReversed().map((line) => (
              <path
                key={line.id}
                d={pathOf(line)}
                fill="none"
                vectorEffect="non-scaling-stroke"
                strokeDasharray={line.dash}
                strokeWidth={LOOKS[line.look].width}
                strokeLinecap={line.look === "hindsight" ? "round" : "butt"}
                strokeLinejoin="round"
                className={LOOKS[line.look].stroke}
              />
            ))}
          </svg>
        </div>
        <LineEnds lines={lines} places={places} say={say} />
        <Dates curve={curve} />
      </div>
      <figcaption className="mt-2 text-small text-soft">
        Nats, added up from left to right in the order the labels came. Lower is better.
      </figcaption>
      <ChartData
        caption="Cumulative loss in nats"
        fileName="cumulative-loss"
        columns={columnsFor(scorers, curve)}
        rows={curve}
      />
    </figure>
  );
}

function pathOf({ points }: LossLine): string {
  return points
    .map(
      ({ x, y }, index) =>
        `${index === 0 ? "M" : "L"}${(x * 1000).toFixed(1)} ${(1000 - y * 1000).toFixed(1)}`,
    )
    .join("");
}

const MOST_MARKS = 20;

/** The best fixed weights are reckoned now and then only: a dot for each time, while dots can be told apart. */
function marksOf({ points }: LossLine): string {
  if (points.length > MOST_MARKS) return "";
  return points.map(({ x, y }) => `M${(x * 1000).toFixed(1)} ${(1000 - y * 1000).toFixed(1)}h0.01`).join("");
}

function HeightScale({ ticks }: { ticks: readonly { value: number; y: number }[] }) {
  const widest = Math.max(...ticks.map(({ value }) => tickText(value).length));
  return (
    <div
      aria-hidden="true"
      className="figures relative mr-2 text-small text-soft"
      style={{ width: `${widest}ch` }}
    >
      {ticks.map(({ value, y }) => (
        <span key={value} className="absolute right-0 translate-y-1/2" style={{ bottom: `${y * 100}%` }}>
          {tickText(value)}
        </span>
      ))}
    </div>
  );
}

const tickText = (value: number) => {
  const places = (String(Math.abs(value)).split(".")[1] ?? "").length;
  return natsText(value, places);
};

/** When the first, the last and some labels between came. */
function Dates({ curve }: { curve: readonly CurvePoint[] }) {
  const first = curve[0];
  const last = curve.at(-1);
  if (!first || !last) return null;
  return (
    <div aria-hidden="true" className="col-start-2 mt-1.5 flex justify-between gap-x-4 text-small text-soft">
      <Time at={first.at} as="day" />
      <Time at={last.at} as="day" />
    </div>
  );
}
