import type { LossLine } from "./loss-lines";

export const LOOKS: Readonly<Record<LossLine["look"], { stroke: string; width: number }>> = {
  in_use: { stroke: "stroke-ink", width: 2.5 },
  candidate: { stroke: "stroke-accent", width: 2 },
  hindsight: { stroke: "stroke-soft", width: 2 },
};

type LineEndsProps = { lines: readonly LossLine[]; places: readonly number[]; say: (nats: number) => string };

/** Each line's name at its end, set apart where lines end close to one another. */
export function LineEnds({ lines, places, say }: LineEndsProps) {
  return (
    <div aria-hidden="true" className="relative">
      <svg
        aria-hidden="true"
        viewBox="0 0 20 1000"
        preserveAspectRatio="none"
        className="absolute inset-y-0 left-0 h-full w-5"
      >
        {lines.map(({ id, points }, index) => (
          <path
            key={id}
            d={`M1 ${1000 - (points.at(-1)?.y ?? 0) * 1000}L18 ${1000 - (places[index] ?? 0) * 1000}`}
            vectorEffect="non-scaling-stroke"
            className="stroke-edge"
          />
        ))}
      </svg>
      {lines.map((line, index) => (
        <div
          key={line.id}
          className="absolute right-0 left-6 translate-y-1/2 leading-tight"
          style={{ bottom: `${(places[index] ?? 0) * 100}%` }}
        >
          <div className="flex items-center gap-1.5">
            <Stroke line={line} />
            <span
              className={`truncate text-small ${line.look === "in_use" ? "font-strong" : ""}`}
              title={line.name}
            >
              {line.name}
            </span>
          </div>
          <div className="figures text-small text-soft">{say(line.last)}</div>
        </div>
      ))}
    </div>
  );
}

function Stroke({ line: { dash, look } }: { line: LossLine }) {
  return (
    <svg aria-hidden="true" viewBox="0 0 32 4" className="hidden h-1 w-8 shrink-0 sm:block">
      <path
        d="M0 2H32"
        strokeDasharray={dash}
        strokeWidth={LOOKS[look].width}
        strokeLinecap={look === "hindsight" ? "round" : "butt"}
        className={LOOKS[look].stroke}
      />
    </svg>
  );
}
