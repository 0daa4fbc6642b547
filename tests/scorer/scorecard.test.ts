import { expect, test } from "vitest";
import { createScorer, scoreByCard } from "@/lib/scorer";
import { drawLabelled } from "./fixture";

const stream = drawLabelled(3000, 5, 31);
const later = drawLabelled(3000, 5, 31);

test.each(["gradient", "newton", "implicit", "leader"] as const)(
  "%s is frozen as the mean of its weights before each label",
  (method) => {
    const scorer = createScorer({ dimension: 5, method, offset: -1 });
    const sum = new Float64Array(5);
    for (let n = 0; n < 300; n++) {
      scorer.weights().forEach((weight, i) => {
        sum[i] = (sum[i] as number) + weight;
      });
      scorer.learn(stream.vectors[n] as Float64Array, stream.labels[n] as 1 | -1);
    }
    const card = scorer.scorecard();
    expect(card).toMatchObject({ kind: "averaged", labels: 300, offset: -1, featureBound: 4 });
    expect(card.parts).toHaveLength(1);
    card.parts[0]?.weights.forEach((weight, i) => {
      expect(weight).toBeCloseTo((sum[i] as number) / 300, 10);
    });
    const x = stream.vectors[7] as Float64Array;
    const margin = x.reduce((total, value, i) => total + (value * (sum[i] as number)) / 300, -1);
    expect(scoreByCard(card, x).logit).toBeCloseTo(margin, 9);
  },
);

test("averaged weights lose no more on the labels they came from than the rule did while learning (Jensen)", () => {
  for (const method of ["gradient", "implicit", "newton"] as const) {
    const scorer = createScorer({ dimension: 5, method });
    let lived = 0;
    stream.vectors.forEach((x, n) => {
      lived += scorer.learn(x, stream.labels[n] as 1 | -1).loss;
    });
    const card = scorer.scorecard();
    const frozen = later.vectors.reduce(
      (sum, x, n) => sum + Math.log1p(Math.exp(-(later.labels[n] as number) * scoreByCard(card, x).logit)),
      0,
    );
    expect(frozen).toBeLessThanOrEqual(lived);
  }
});

test("improper is frozen as its latest state, with its certificate and no promise for new cases", () => {
  const scorer = createScorer({ dimension: 5 });
  stream.vectors.slice(0, 100).forEach((x, n) => {
    scorer.learn(x, stream.labels[n] as 1 | -1);
  });
  const card = scorer.scorecard();
  expect(card.kind).toBe("latest");
  expect(card.certificate).toBe(scorer.certificate());
  expect(card.guarantee).toContain("nothing is proven");
  const long = Float64Array.of(9, 9, 9, 9, 9);
  expect(scoreByCard(card, long).logit).toBe(scorer.score(long).logit);
});
