import { expect, test } from "vitest";
import { createScorer, type ScorerOptions } from "@/lib/scorer";
import { readSet, readTable } from "./fixture";

// Reference: 40-digit arithmetic by an independent program, see tests/fixtures/scorer/README.md.
const TOLERANCE = 1e-9;
const pima = readSet("pima");

const cases: { file: string; options: Omit<ScorerOptions, "dimension"> }[] = [
  { file: "improper_half", options: { method: "improper", regularization: 0.1 } },
  {
    file: "improper_full_B4",
    // The reference bounds no weights: kappa = 1/17 comes from the margin bound BR = 16.
    options: { method: "improper", outcomeWeight: 1, regularization: 0.1, marginBound: 16, weightBound: 1e6 },
  },
  { file: "implicit", options: { method: "implicit", regularization: 0.1 } },
  { file: "ekf", options: { method: "implicit", linearization: "prior", regularization: 0.5 } },
  { file: "gradient_B4", options: { method: "gradient", weightBound: 4, featureBound: 4 } },
];

function vectorOf(row: Record<string, number>): Float64Array {
  return pima.vectors[row.row as number] as Float64Array;
}

test.each(cases)("$file gives the reference's figures on all 768 labels to 1e-9", ({ file, options }) => {
  const rows = readTable(`pima.reference.${file}.csv.gz`);
  expect(rows).toHaveLength(768);
  const scorer = createScorer({ dimension: 9, ...options });
  let worst = 0;
  const hold = (value: number, reference: number | undefined) => {
    worst = Math.max(worst, Math.abs(value - (reference as number)));
  };
  let logDeterminant = 0;
  for (const row of rows) {
    const x = vectorOf(row);
    const score = scorer.score(x);
    hold(score.rawEvidence, row.z0);
    hold(score.leverage, row.s);
    hold(score.logit, row.z);
    hold(score.probability, row.p);
    const { loss, step } = scorer.learn(x, row.y as 1 | -1);
    hold(loss, row.loss);
    // log det A grows by log(1 + hs) = -log(1 - (h/den)·s).
    logDeterminant -= Math.log1p(-step.shrink * score.leverage);
    hold(logDeterminant, row.logdet);
  }
  expect(worst).toBeLessThan(TOLERANCE);
});

test.each(cases.slice(0, 2))(
  "$file's certificate is lambda·B² plus the reference's running sum",
  ({ file, options }) => {
    const rows = readTable(`pima.reference.${file}.csv.gz`);
    const scorer = createScorer({ dimension: 9, ...options });
    const start = scorer.certificate() as number;
    expect(start).toBeCloseTo(0.1 * (options.weightBound ?? 16) ** 2, 3);
    for (const row of rows) {
      scorer.learn(vectorOf(row), row.y as 1 | -1);
      const sum = (scorer.certificate() as number) - start;
      // With a bound of 1e6 the start is 1e11, which leaves 5 digits after the point.
      const tolerance = start > 1e6 ? 1e-2 : TOLERANCE;
      expect(Math.abs(sum - (row.cert_sum_delta as number))).toBeLessThan(tolerance);
    }
  },
);

test("aggregate gives the reference mixture's probabilities, experts and shares to 1e-9", () => {
  const scorer = createScorer({ method: "aggregate", dimension: 9, weightBound: 1e6 });
  let worst = 0;
  for (const row of readTable("pima.reference.mixture.csv.gz")) {
    const x = vectorOf(row);
    const score = scorer.score(x);
    const { parts } = scorer.reading();
    const { places } = scorer.place(x);
    worst = Math.max(
      worst,
      Math.abs(score.logit - (row.z as number)),
      Math.abs(score.probability - (row.p as number)),
    );
    parts.forEach((part, k) => {
      worst = Math.max(worst, Math.abs(part.share - (row[`w${k}`] as number)));
      // Experts 3 to 5 hold nothing back: their log odds are z0 itself.
      if (part.outcomeWeight === 0)
        worst = Math.max(worst, Math.abs((places[2 * k] as number) - (row[`z${k}`] as number)));
    });
    const { loss } = scorer.learn(x, row.y as 1 | -1);
    worst = Math.max(worst, Math.abs(loss - (row.loss as number)));
  }
  expect(worst).toBeLessThan(TOLERANCE);
});
