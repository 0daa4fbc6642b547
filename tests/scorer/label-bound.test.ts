import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { createScorer, type Label, labelBound, type ScorerOptions } from "@/lib/scorer";
import { anyLabels, anyOptions } from "./arbitraries";

/** Ends of sums and of the projection's search: far below anything that matters here. */
const ROUNDING = 1e-6;

function distance(a: Float64Array, b: Float64Array): number {
  return Math.sqrt(a.reduce((sum, value, i) => sum + (value - (b[i] as number)) ** 2, 0));
}

test("no label of any method moves the weights farther than the bound says", () => {
  fc.assert(
    fc.property(anyOptions, anyLabels, (options, labels) => {
      const scorer = createScorer(options);
      const heaviest = labels.reduce((most, { weight }) => Math.max(most, weight), 0);
      for (const { x, label, weight } of labels) {
        const before = scorer.weights();
        // `leader` takes in several labels at once, the heaviest of which may have come before.
        const bound = labelBound(options, scorer.labels, options.method === "leader" ? heaviest : weight);
        scorer.learn(x, label, weight);
        expect(distance(scorer.weights(), before)).toBeLessThanOrEqual(bound.distance + ROUNDING);
      }
    }),
    { numRuns: 1500 },
  );
});

test("nor one that comes from somebody who tries: the vector that moves most, label after label", () => {
  const methods: Omit<ScorerOptions, "dimension">[] = [
    { method: "improper" },
    { method: "improper", regularization: 0.05, weightBound: 3 },
    { method: "implicit", regularization: 0.1 },
    { method: "newton" },
    { method: "gradient" },
    { method: "leader", refitEvery: 1 },
  ];
  for (const options of methods.map((one) => ({ dimension: 3, ...one }))) {
    const scorer = createScorer(options);
    for (let n = 0; n < 60; n++) {
      const before = scorer.weights();
      const bound = labelBound(options, scorer.labels).distance;
      // Along each axis by turns, always against what the scorer believes.
      const x = new Float64Array(3);
      x[n % 3] = 4;
      const label: Label = scorer.score(x).logit > 0 ? -1 : 1;
      scorer.learn(x, label);
      expect(distance(scorer.weights(), before)).toBeLessThanOrEqual(bound + ROUNDING);
    }
  }
});

describe("the bound is no idle one", () => {
  const x = Float64Array.of(4, 0);

  test.each([
    [{ method: "implicit", regularization: 8 }, 0.7],
    [{ method: "improper", regularization: 8 }, 0.7],
    [{ method: "gradient" }, 0.49],
    [{ method: "leader", regularization: 20, refitEvery: 1 }, 0.7],
  ] as const)("a first label against all expectation comes near it: %o", (options, share) => {
    const scorer = createScorer({ dimension: 2, offset: -8, ...options });
    scorer.learn(x, 1);
    const moved = distance(scorer.weights(), new Float64Array(2));
    expect(moved).toBeGreaterThan(share * labelBound({ dimension: 2, ...options }, 0).distance);
  });
});

test("one label fewer changes the leader's weights by no more than R/(2·lambda), wherever it stood", () => {
  const options: ScorerOptions = { dimension: 4, method: "leader", refitEvery: 1, regularization: 0.5 };
  fc.assert(
    fc.property(anyLabels, fc.nat(), (labels, pick) => {
      fc.pre(labels.length > 0);
      const out = pick % labels.length;
      const whole = createScorer(options);
      const without = createScorer(options);
      labels.forEach(({ x, label }, n) => {
        whole.learn(x, label);
        if (n !== out) without.learn(x, label);
      });
      expect(distance(whole.weights(), without.weights())).toBeLessThanOrEqual(
        labelBound(options, 0).distance + ROUNDING,
      );
    }),
    { numRuns: 100 },
  );
});
