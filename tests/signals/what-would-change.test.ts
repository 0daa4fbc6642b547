import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { createScorer, type Scorer } from "@/lib/scorer";
import { CATALOGUE, DIMENSION } from "@/lib/signals/catalogue";
import { CATALOGUE_SPANS, type SignalSpan, whatWouldChange } from "@/lib/signals/what-would-change";
import { anyLabels, anyOptions, anyVector } from "../scorer/arbitraries";

/** Two signals of four coordinates: one of one, one of two; the last is the bias. */
const SPANS: readonly SignalSpan[] = [
  { key: "narrow", name: "Narrow", from: 0, to: 1 },
  { key: "broad", name: "Broad", from: 1, to: 3 },
];

const trained = fc.record({ options: anyOptions, labels: anyLabels }).map(({ options, labels }) => {
  const scorer = createScorer(options);
  for (const { x, label, weight } of labels) scorer.learn(x, label, weight);
  return scorer;
});

describe("for scorers of every method", () => {
  test("offset, contributions and pull add up to the score within 1e-9", () => {
    fc.assert(
      fc.property(trained, anyVector, (scorer, x) => {
        const { offset, contributions, pull, logit } = scorer.explain(x);
        const sum = contributions.reduce((total, nats) => total + nats, offset + pull);
        expect(Math.abs(sum - logit)).toBeLessThan(1e-9);
      }),
      { numRuns: 500 },
    );
  });

  test("a signal's line is the score of the vector without it, taken anew in full", () => {
    fc.assert(
      fc.property(trained, anyVector, (scorer, x) => {
        const { logit } = scorer.score(x);
        for (const line of whatWouldChange(scorer, x, SPANS)) {
          const without =
            line.key === "narrow"
              ? Float64Array.of(0, x[1] as number, x[2] as number, x[3] as number)
              : Float64Array.of(x[0] as number, 0, 0, x[3] as number);
          expect(line.logit).toBe(scorer.score(without).logit);
          expect(line.change).toBe(line.logit - logit);
          expect(line.change).not.toBe(0);
        }
      }),
      { numRuns: 300 },
    );
  });

  test("lines come by the size of their change, and no more than asked for", () => {
    fc.assert(
      fc.property(trained, anyVector, fc.integer({ min: 0, max: 3 }), (scorer, x, most) => {
        const all = whatWouldChange(scorer, x, SPANS, 2).map(({ change }) => Math.abs(change));
        expect(all).toEqual([...all].sort((a, b) => b - a));
        expect(whatWouldChange(scorer, x, SPANS, most)).toEqual(
          whatWouldChange(scorer, x, SPANS, 2).slice(0, most),
        );
      }),
      { numRuns: 200 },
    );
  });
});

test("the pull is taken anew as well: with less to be unsure of, less is held back", () => {
  const scorer = createScorer({ dimension: 3, offset: -3 });
  scorer.learn(Float64Array.of(1, 0, 1), 1);
  const x = Float64Array.of(1, 1, 1);
  const [line] = whatWouldChange(scorer, x, [{ key: "unseen", name: "Unseen", from: 1, to: 2 }]);
  const { contributions, pull } = scorer.explain(x);
  // Its weight is still 0, so it adds nothing itself; the score changes through the pull alone.
  expect(contributions[1]).toBe(0);
  const without = scorer.explain(Float64Array.of(1, 0, 1));
  expect(without.pull).not.toBe(pull);
  expect(line?.change).toBeCloseTo(without.pull - pull, 12);
});

test("a signal whose coordinates are all 0 has no line: it speaks for nothing already", () => {
  const scorer = createScorer({ dimension: 4, method: "gradient" });
  scorer.learn(Float64Array.of(1, 1, 1, 1), 1);
  const keys = whatWouldChange(scorer, Float64Array.of(1, 0, 0, 1), SPANS).map(({ key }) => key);
  expect(keys).toEqual(["narrow"]);
});

test("of equal changes the one that stands first in the catalogue comes first", () => {
  const scorer: Pick<Scorer, "score"> = createScorer({ dimension: 4, method: "gradient" });
  (scorer as Scorer).learn(Float64Array.of(1, 1, 0, 1), 1);
  const lines = whatWouldChange(scorer, Float64Array.of(1, 1, 0, 1), SPANS);
  expect(lines[0]?.change).toBe(lines[1]?.change);
  expect(lines.map(({ key }) => key)).toEqual(["narrow", "broad"]);
});

test("the catalogue's spans cover every coordinate but the bias, each once", () => {
  const covered = CATALOGUE_SPANS.flatMap(({ from, to }) =>
    Array.from({ length: to - from }, (_, k) => from + k),
  );
  expect(covered).toEqual(Array.from({ length: DIMENSION - 1 }, (_, i) => i));
  expect(CATALOGUE_SPANS.map(({ key }) => key)).toEqual(CATALOGUE.map(({ key }) => key));
});
