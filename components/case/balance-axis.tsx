import type { ReactNode } from "react";
import { AXIS_DECIBANS, axisPlace } from "../ui/axis-scale";
import { percentOf, signedDecibans } from "../ui/probability";
import { RugLane } from "./rug-lane";

export type Thresholds = { reviewDecibans: number; holdDecibans: number };

/** Every lane of the balance is set between the same two margins, so that one place means one weight in all of them. */
export const AXIS_INSET = "relative mx-3 sm:mx-14";

export const leftAt = (decibans: number) => ({ left: `${axisPlace(decibans) * 100}%` });

type BalanceAxisProps = {
  thresholds: Thresholds | null;
  /** Evidence of every waiting case. */
  rug: readonly number[] | null;
  /** The case in hand; null while there is none, or while its score is hidden. */
  pointer: { totalDecibans: number; probability: number } | null;
  /** Said in the pointer's place where there is none. */
  instead?: ReactNode;
};

export function BalanceAxis({ thresholds, rug, pointer, instead }: BalanceAxisProps) {
  return (
    <div className={AXIS_INSET}>
      <div className="relative h-4.5 text-small text-soft">
        {thresholds && <ThresholdNames {...thresholds} />}
      </div>
      <div className="relative h-9 border-b border-ink">
        {rug && <RugLane evidenceDecibans={rug} />}
        {thresholds && <ThresholdMarks {...thresholds} />}
        {pointer && <Pointer decibans={pointer.totalDecibans} />}
      </div>
      <Scale />
      <div className="relative h-6">
        {pointer ? <Reading {...pointer} /> : <p className="text-center text-small text-soft">{instead}</p>}
      </div>
    </div>
  );
}

/** Left of this there is no room for the name before its mark on a narrow screen. */
const REVIEW_NAME_FROM = -10;

function ThresholdNames({ reviewDecibans, holdDecibans }: Thresholds) {
  return (
    <>
      <span
        className={`absolute whitespace-nowrap px-1.5 ${reviewDecibans > REVIEW_NAME_FROM ? "-translate-x-full" : ""}`}
        style={leftAt(reviewDecibans)}
      >
        review from <span className="figures">{signedDecibans(reviewDecibans)}</span>
      </span>
      <span className="absolute whitespace-nowrap px-1.5" style={leftAt(holdDecibans)}>
        hold from <span className="figures">{signedDecibans(holdDecibans)}</span>
      </span>
    </>
  );
}

function ThresholdMarks({ reviewDecibans, holdDecibans }: Thresholds) {
  return [reviewDecibans, holdDecibans].map((decibans, index) => (
    <span
      key={index === 0 ? "review" : "hold"}
      aria-hidden="true"
      className="absolute -top-4.5 bottom-0 border-l border-ink"
      style={leftAt(decibans)}
    />
  ));
}

function Pointer({ decibans }: { decibans: number }) {
  return (
    <svg
      aria-hidden="true"
      viewBox="0 0 14 35"
      className="absolute -bottom-px h-8.75 w-3.5 -translate-x-1/2"
      style={leftAt(decibans)}
    >
      <path d="M7 35V8" strokeWidth="2" className="stroke-accent" />
      <path d="M7 12L1 1H13Z" className="fill-accent" />
    </svg>
  );
}

const MARKS = Array.from({ length: 7 }, (_, index) => -AXIS_DECIBANS + index * 10);

function Scale() {
  return (
    <div aria-hidden="true" className="relative h-5 text-small text-soft">
      {MARKS.map((decibans) => (
        <span
          key={decibans}
          className="figures absolute -translate-x-1/2 border-t-0 leading-5 before:absolute before:-top-px before:left-1/2 before:h-1.5 before:border-l before:border-ink"
          style={leftAt(decibans)}
        >
          {decibans === 0 ? "0" : signedDecibans(decibans).replace(".0", "")}
        </span>
      ))}
    </div>
  );
}

/** The total in figures, beside its place, on whichever side there is room. */
function Reading({ totalDecibans, probability }: { totalDecibans: number; probability: number }) {
  const side =
    totalDecibans > 12
      ? "-translate-x-full pr-2 text-right"
      : totalDecibans < -12
        ? "pl-2"
        : "-translate-x-1/2";
  return (
    <p className={`absolute whitespace-nowrap ${side}`} style={leftAt(totalDecibans)}>
      <strong className="figures font-strong">{signedDecibans(totalDecibans)}</strong>
      <span className="text-small text-soft"> decibans, </span>
      <strong className="figures font-strong">{percentOf(probability)}</strong>
      <span className="text-small text-soft">{"\u202f"}% fraud</span>
    </p>
  );
}
