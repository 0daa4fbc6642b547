import type { CalibrationBin, ScorerFigures } from "@/lib/learning/learning-schema";
import { type ChartColumn, ChartData } from "../ui/chart-data";
import { countText } from "../ui/count";
import { percentOf } from "../ui/probability";
import { brierText, NOT_DEFINED } from "./figure-text";

const TICKS = [0, 0.01, 0.05, 0.1, 0.25, 0.5, 1];

/** Both axes grow with the square root, so that the many low predictions do not lie on one another. */
const place = (share: number) => `${Math.sqrt(share) * 100}%`;

const COLUMNS: readonly ChartColumn<CalibrationBin>[] = [
  {
    name: "Predicted from",
    field: "predicted_from",
    value: ({ from }) => from,
    say: ({ from }) => percent(from),
  },
  { name: "to", field: "predicted_to", value: ({ to }) => to, say: ({ to }) => percent(to) },
  {
    name: "Mean predicted",
    field: "mean_predicted",
    value: ({ meanPredicted }) => meanPredicted,
    say: ({ meanPredicted }) => percent(meanPredicted),
  },
  {
    name: "Found",
    field: "observed",
    value: ({ observed }) => observed,
    say: ({ observed }) => percent(observed),
  },
  { name: "Interval from", field: "low", value: ({ low }) => low, say: ({ low }) => percent(low) },
  { name: "to", field: "high", value: ({ high }) => high, say: ({ high }) => percent(high) },
  { name: "Payments", field: "n", value: ({ n }) => n, say: ({ n }) => countText(n) },
];

const percent = (share: number) => `${percentOf(share)}\u202f%`;

/** What one scorer predicted against what was found, in steps of about as many payments each. */
export function ReliabilityChart({ scorer }: { scorer: ScorerFigures }) {
  const { name, role, brier, spiegelhalterZ, calibration: bins } = scorer;
  return (
    <figure className="min-w-0">
      <figcaption className="mb-3">
        <span className={role === "in_use" ? "font-strong" : ""}>{name}</span>
        <span className="block text-small text-soft">
          Brier <span className="figures">{brier ? brierText(brier.value) : NOT_DEFINED}</span>
          {brier && (
            <span className="figures">
              {" "}
              ({brierText(brier.low)}–{brierText(brier.high)}, n {countText(brier.n)})
            </span>
          )}
          <span className="block">{bandWords(spiegelhalterZ)}</span>
        </span>
      </figcaption>
      <div className="grid aspect-[4/3] max-w-md grid-cols-[2.5rem_1fr] grid-rows-[1fr_1.5rem]">
        <div aria-hidden="true" className="figures relative text-small text-soft">
          {TICKS.map((tick) => (
            <span key={tick} className="absolute right-2 translate-y-1/2" style={{ bottom: place(tick) }}>
              {tick * 100}
            </span>
          ))}
        </div>
        <div
          role="img"
          aria-label={chartWords(name, bins)}
          className="relative border-b border-l border-edge"
        >
          <Ground />
          {bins.map((bin) => (
            <Mark key={bin.from} bin={bin} />
          ))}
        </div>
        <span aria-hidden="true" />
        <div aria-hidden="true" className="figures relative text-small text-soft">
          {TICKS.map((tick) => (
            <span
              key={tick}
              className="absolute top-1 -translate-x-1/2 last:-translate-x-full"
              style={{ left: place(tick) }}
            >
              {tick * 100}
            </span>
          ))}
        </div>
      </div>
      <p className="mt-1 text-small text-soft">
        Across: predicted, %. Up: found fraudulent, %. Low shares are drawn farther apart. {sizeWords(bins)}
      </p>
      <ChartData
        caption={`Calibration of ${name}`}
        fileName={`calibration-${name.toLowerCase().replace(/[^a-z0-9]+/g, "-")}`}
        columns={COLUMNS}
        rows={bins}
      />
    </figure>
  );
}

/** Rules to read heights by, and the diagonal on which prediction and finding agree. */
function Ground() {
  return (
    <svg
      aria-hidden="true"
      viewBox="0 0 100 100"
      preserveAspectRatio="none"
      className="absolute inset-0 size-full"
    >
      {TICKS.slice(1).map((tick) => (
        <path
          key={tick}
          d={`M0 ${100 - Math.sqrt(tick) * 100}H100`}
          vectorEffect="non-scaling-stroke"
          className="stroke-rule"
        />
      ))}
      <path d="M0 100L100 0" vectorEffect="non-scaling-stroke" strokeDasharray="2 4" className="stroke-ink" />
    </svg>
  );
}

/** A point with its interval: filled where the interval holds what was predicted, hollow where it does not. */
function Mark({ bin }: { bin: CalibrationBin }) {
  const { meanPredicted, observed, low, high, n } = bin;
  const left = place(meanPredicted);
  return (
    <>
      <span
        className="absolute w-0.5 -translate-x-1/2 bg-soft"
        style={{ left, bottom: place(low), top: `${100 - Math.sqrt(high) * 100}%` }}
      />
      <span
        title={`predicted ${percent(meanPredicted)}, found ${percent(observed)}, n ${countText(n)}`}
        className={`absolute size-2.5 -translate-x-1/2 translate-y-1/2 rounded-full border-2 border-ink ${agrees(bin) ? "bg-ink" : "bg-paper"}`}
        style={{ left, bottom: place(observed) }}
      />
    </>
  );
}

const agrees = ({ meanPredicted, low, high }: CalibrationBin) =>
  meanPredicted >= low && meanPredicted <= high;

function chartWords(name: string, bins: readonly CalibrationBin[]): string {
  const off = bins.filter((bin) => !agrees(bin)).length;
  return `Reliability of ${name}: ${bins.length} steps, in ${off} of them the prediction lies outside the interval of what was found`;
}

function sizeWords(bins: readonly CalibrationBin[]): string {
  const sizes = bins.map(({ n }) => n);
  const least = Math.min(...sizes);
  const most = Math.max(...sizes);
  const count = least === most ? countText(least) : `${countText(least)} to ${countText(most)}`;
  return `Each mark is ${count} payments.`;
}

/** 1.96: two standard deviations, beyond which one sequence in twenty falls by chance. */
const BAND = 1.96;

/** Positive z: more fraud came than was predicted (Spiegelhalter 1986). */
function bandWords(z: ScorerFigures["spiegelhalterZ"]): string {
  if (!z) return "Agreement of predictions and findings: not defined.";
  const value = `z ${z.z < 0 ? "−" : "+"}${Math.abs(z.z).toFixed(1)}`;
  if (Math.abs(z.z) <= BAND) return `✓ Predictions and findings agree (${value}).`;
  return `▲ Predictions and findings differ by more than chance (${value}).`;
}
