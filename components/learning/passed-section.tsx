"use client";
import type { UseQueryResult } from "@tanstack/react-query";
import { decibansToNats, probabilityOf } from "@/lib/decibans";
import type { PassedView } from "@/lib/learning/passed-schema";
import { formatAmount, groupDigits } from "@/lib/money";
import type { ApiProblem } from "../api";
import { countText } from "../ui/count";
import { EmptyState } from "../ui/empty-state";
import { Figure, FigureRow } from "../ui/figure";
import { HowToRead } from "../ui/how-to-read";
import { percentOf, signedDecibans } from "../ui/probability";
import { Section } from "../ui/section";
import { LateView } from "./late-view";
import { PassedTable } from "./passed-table";

type PassedSectionProps = { query: UseQueryResult<PassedView, ApiProblem>; reviewDecibans: number };

const WHY_NOT: Readonly<Record<NonNullable<PassedView["reason"]>, string>> = {
  nothing_passed: "No payment lay below the review line on these days.",
  nothing_drawn: "None of the passed payments has been drawn into the random sample yet.",
  nothing_decided:
    "None of the drawn payments has been decided yet. Sampled cases are handed out in their share.",
};

/** Fraud that nobody looked at, estimated from the random sample. */
export function PassedSection({ query, reviewDecibans }: PassedSectionProps) {
  return (
    <Section
      title="Passed unreviewed"
      lead="How much fraud lies below the review line, estimated from passed payments drawn at random and reviewed."
    >
      <LateView query={query} lines={6}>
        {(view) => (
          <>
            <Estimates view={view} reviewDecibans={reviewDecibans} />
            <PassedTable view={view} />
            <HowToRead terms={TERMS} />
          </>
        )}
      </LateView>
    </Section>
  );
}

function Estimates({ view, reviewDecibans }: { view: PassedView; reviewDecibans: number }) {
  const { estimate, reason, baseCurrency } = view;
  const { code } = baseCurrency;
  const money = (minor: number) => groupDigits(formatAmount(Math.round(minor), code));
  const line = (
    <Figure
      label="Review line"
      value={signedDecibans(reviewDecibans)}
      unit="decibans"
      note={`payments below ${percentOf(probabilityOf(decibansToNats(reviewDecibans)))} % pass unreviewed`}
    />
  );
  if (!estimate) {
    return (
      <>
        <FigureRow>{line}</FigureRow>
        <div className="mb-5">
          <EmptyState title="Nothing to estimate from yet">{reason && WHY_NOT[reason]}</EmptyState>
        </div>
      </>
    );
  }
  return (
    <FigureRow>
      {line}
      <Figure
        label="Fraudulent among them"
        value={about(estimate.fraudulent.value)}
        unit="payments"
        note={interval(estimate.fraudulent, about)}
      />
      <Figure
        label={`In ${countText(1000)} passed`}
        value={estimate.perThousand.value.toFixed(2)}
        note={interval(estimate.perThousand, (value) => value.toFixed(2))}
      />
      <Figure
        label="Their value"
        value={money(estimate.valueMinor.value)}
        unit={code}
        note={
          <>
            {interval(estimate.valueMinor, money)}
            {estimate.unpriced > 0 && `; ${countText(estimate.unpriced)} without a rate left out`}
          </>
        }
      />
    </FigureRow>
  );
}

/** Estimates of few payments keep a place behind the point. */
const about = (value: number) => (value < 100 ? value.toFixed(1) : countText(Math.round(value)));

const interval = ({ low, high }: { low: number; high: number }, say: (value: number) => string) =>
  `95 % interval ${say(low)} to ${say(high)}`;

const TERMS = [
  {
    term: "Estimate",
    means:
      "Each drawn payment stands for as many as its chance to be drawn says: drawn with a chance of 1 in 50, it counts for 50 (Horvitz and Thompson 1952). Choosing what to review does not bend it.",
  },
  {
    term: "Waiting and lapsed",
    means:
      "Drawn payments without a verdict are taken to be like those that have one: they are handed out by turn, not by score.",
  },
  {
    term: "Interval",
    means: "The truth lies within it 95 times in 100. It is wide while few have been drawn.",
  },
  {
    term: "Reported by others",
    means:
      "Passed payments that a customer or another institution has reported since. They are counted for themselves and not mixed into the estimate.",
  },
];
