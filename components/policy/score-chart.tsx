import type { ScoreHistogram } from "@/lib/policy/schema";
import { AXIS_DECIBANS, axisPlace } from "../ui/axis-scale";
import { type ChartColumn, ChartData } from "../ui/chart-data";
import { countText } from "../ui/count";
import { signedDecibans } from "../ui/probability";
import { type Bar, chartBars } from "./chart-bars";

export type ChartLine = { decibans: number; name: string; proposed?: boolean };

type ScoreChartProps = { recent: ScoreHistogram; lines: readonly ChartLine[] };

/** Height of a line's name above the bars. */
const LINE_NAME_REM = 1.2;
const TICKS = [-30, -20, -10, 0, 10, 20, 30];
const tickText = (tick: number) => (tick > 0 ? `+${tick}` : `${tick}`.replace("-", "−"));

const COLUMNS: readonly ChartColumn<Bar>[] = [
  {
    name: "Decibans from",
    field: "decibans_from",
    value: ({ from }) => from,
    say: ({ from }) => signedDecibans(from),
  },
  { name: "Payments", field: "payments", value: ({ count }) => count, say: ({ count }) => countText(count) },
];

/** How the recent scores lie along the axis of evidence, and where the lines cut them. */
export function ScoreChart({ recent, lines }: ScoreChartProps) {
  const bars = chartBars(recent);
  return (
    <figure>
      <div
        className="relative h-36 border-b border-edge"
        style={{ marginTop: `${lines.length * LINE_NAME_REM + 0.4}rem` }}
      >
        <svg
          role="img"
          aria-label={`Recent payments by evidence; ${lines.map(lineWords).join(", ")}`}
          viewBox="0 0 1000 100"
          preserveAspectRatio="none"
          className="absolute inset-0 size-full"
        >
          {bars.map(({ from, place, width, height }) => (
            <rect
              key={from}
              x={place * 1000}
              y={100 - height * 100}
              width={width * 1000}
              height={height * 100}
              className="fill-soft"
            />
          ))}
        </svg>
        {lines.map((line, index) => (
          <LineMark key={line.name} line={line} riseRem={(lines.length - index) * LINE_NAME_REM} />
        ))}
      </div>
      <div aria-hidden="true" className="relative h-6 text-small text-soft">
        {TICKS.map((tick) => (
          <span
            key={tick}
            className="figures absolute top-1 -translate-x-1/2 first:translate-x-0 last:-translate-x-full"
            style={{ left: `${axisPlace(tick) * 100}%` }}
          >
            {tickText(tick)}
          </span>
        ))}
      </div>
      <figcaption className="mt-1 text-small text-soft">
        Evidence in decibans; 0 is even odds. Heights grow with the square root of the count, so that the few
        high scores show. What lies beyond ±{AXIS_DECIBANS} stands at the ends.
      </figcaption>
      <ChartData
        caption="Recent payments by evidence"
        fileName="recent-scores"
        columns={COLUMNS}
        rows={bars}
      />
    </figure>
  );
}

const lineWords = ({ name, decibans }: ChartLine) => `${name} at ${signedDecibans(decibans)}`;

type LineMarkProps = { line: ChartLine; riseRem: number };

/** A line with its name above it, each at a height of its own, since lines may lie close; proposed ones are dashed. */
function LineMark({ line, riseRem }: LineMarkProps) {
  const place = axisPlace(line.decibans);
  const side = place > 0.6 ? "right-1.5" : "left-1.5";
  return (
    <div
      aria-hidden="true"
      className={`absolute bottom-0 border-l-2 border-ink ${line.proposed ? "border-dashed" : ""}`}
      style={{ left: `${place * 100}%`, top: `-${riseRem}rem` }}
    >
      <span className={`absolute -top-0.5 ${side} text-small whitespace-nowrap`}>
        {line.name} <span className="figures">{signedDecibans(line.decibans)}</span>
      </span>
    </div>
  );
}
