"use client";
import { type CSSProperties, useState } from "react";
import type { EvidenceView } from "@/lib/cases/schema";
import { axisPlace } from "../ui/axis-scale";
import { Button } from "../ui/button";
import { type ChartColumn, ChartData } from "../ui/chart-data";
import { signedDecibans } from "../ui/probability";
import { AXIS_INSET, leftAt } from "./balance-axis";
import { type EvidenceLine, type EvidenceRow, evidenceLines, evidenceRows } from "./evidence-rows";

/** Beside the figures, what each signal looks at: the bars have room for it only under a mouse's pointer. */
const COLUMNS: readonly ChartColumn<EvidenceLine>[] = [
  { name: "Signal", field: "signal", value: ({ name }) => name, isText: true },
  { name: "Reading", field: "reading", value: ({ reading }) => reading, isText: true },
  { name: "What it means", field: "explanation", value: ({ explanation }) => explanation, isText: true },
  {
    name: "Decibans",
    field: "decibans",
    value: ({ decibans }) => decibans,
    say: ({ decibans }) => signedDecibans(decibans),
  },
];

type SignalBarsProps = {
  evidence: EvidenceView;
  /** Signals named one by one; the rest stand in one line. */
  most: number;
};

/** What each signal adds, as bars that all hang from zero on the scale of the axis above. They add up to the total. */
export function SignalBars({ evidence, most }: SignalBarsProps) {
  const [all, setAll] = useState(false);
  return (
    <>
      <div className={all ? "max-h-[50vh] overflow-y-auto" : ""}>
        <div className={AXIS_INSET}>
          <div aria-hidden="true" className="pointer-events-none absolute inset-0">
            <span className="absolute inset-y-0 border-l border-ink" style={leftAt(0)} />
            <span
              className="absolute inset-y-0 border-l border-edge border-dotted"
              style={leftAt(evidence.reviewDecibans)}
            />
            <span
              className="absolute inset-y-0 border-l border-edge border-dotted"
              style={leftAt(evidence.holdDecibans)}
            />
          </div>
          <ul aria-label="What the evidence is made of, in decibans">
            {evidenceRows(evidence, all ? evidence.signals.length : most).map((row) => (
              <Bar key={row.key} row={row} {...(row.kind === "rest" && { onOpen: () => setAll(true) })} />
            ))}
            <Bar
              row={{
                key: "total",
                name: "Total",
                reading: null,
                explanation: "Sum of the lines above",
                decibans: evidence.totalDecibans,
                kind: "total",
              }}
            />
          </ul>
          {all && (
            <Button look="quiet" small className="px-0" onClick={() => setAll(false)}>
              Only the heaviest
            </Button>
          )}
        </div>
      </div>
      <div className="px-3 sm:px-14">
        <ChartData
          caption="What the evidence is made of"
          fileName="balance"
          columns={COLUMNS}
          rows={evidenceLines(evidence)}
        />
      </div>
    </>
  );
}

type BarRow = Omit<EvidenceRow, "kind"> & { kind: EvidenceRow["kind"] | "total" };

/** `onOpen` shows what a summed line is made of. */
function Bar({ row, onOpen }: { row: BarRow; onOpen?: () => void }) {
  const right = row.decibans >= 0;
  const place = axisPlace(row.decibans) * 100;
  const span: CSSProperties = {
    left: `${Math.min(place, 50)}%`,
    width: `${Math.abs(place - 50)}%`,
  };
  return (
    <li
      className="relative h-8 text-small leading-4.5 sm:h-4.5"
      style={{ "--end": `${place}%` } as CSSProperties}
      title={[row.reading, row.explanation].filter(Boolean).join(". ")}
    >
      <span
        className={`relative block truncate pr-14 sm:absolute sm:max-w-[calc(50%-0.75rem)] sm:pr-0 ${right ? "sm:right-[calc(50%+0.5rem)]" : "sm:left-[calc(50%+0.5rem)]"}`}
      >
        {/* On the ground's colour, so that the lines pass behind the words. */}
        <span className="bg-paper">
          {onOpen ? (
            <button type="button" onClick={onOpen} className="underline decoration-edge underline-offset-2">
              {row.name}
            </button>
          ) : (
            <span className={row.kind === "total" ? "font-strong" : ""}>{row.name}</span>
          )}
          {row.reading && <span className="text-soft">, {row.reading}</span>}
        </span>
      </span>
      <span
        aria-hidden="true"
        className={`absolute bottom-0.5 h-2 sm:bottom-1.25 ${fillOf(row)}`}
        style={span}
      />
      <span
        className={`figures absolute top-0 right-0 bg-paper ${row.kind === "total" ? "font-strong" : ""} ${right ? "sm:right-auto sm:left-[calc(var(--end)+0.375rem)]" : "sm:right-[calc(100%-var(--end)+0.375rem)]"}`}
      >
        {signedDecibans(row.decibans)}
      </span>
    </li>
  );
}

function fillOf(row: BarRow): string {
  switch (row.kind) {
    case "total":
      return "bg-ink";
    case "base_rate":
      return "bg-edge";
    case "little_experience":
      return "border border-ink border-dashed";
    default:
      return row.decibans >= 0 ? "bg-ochre" : "bg-verdigris";
  }
}
