import { describe, expect, test } from "vitest";
import { bestInHindsight, createScorer, type Scorer, type ScorerOptions } from "@/lib/scorer";
import { drawLabelled, inOrder, type Labelled, readOrders, readSet, seededNumbers } from "./fixture";

/** Loss of fixed weights, and their largest margin, offset included. */
function judge({ vectors, labels }: Labelled, weights: Float64Array, offset: number) {
  let loss = 0;
  let margin = 0;
  vectors.forEach((x, n) => {
    const z = x.reduce((sum, value, i) => sum + value * (weights[i] as number), offset);
    loss += Math.log1p(Math.exp(-(labels[n] as number) * z));
    margin = Math.max(margin, Math.abs(z));
  });
  return { loss, margin };
}

function learnAll(scorer: Scorer, { vectors, labels }: Labelled): number {
  let total = 0;
  vectors.forEach((x, n) => {
    total += scorer.learn(x, labels[n] as 1 | -1).loss;
  });
  return total;
}

/** The longest multiple of these weights whose margins stay within the bound. */
function withinMargin(set: Labelled, weights: Float64Array, offset: number, bound: number): Float64Array {
  let share = 1;
  while (
    judge(
      set,
      weights.map((weight) => share * weight),
      offset,
    ).margin > bound
  )
    share *= 0.95;
  return weights.map((weight) => share * weight);
}

const pima = readSet("pima");
const sets: Labelled[] = [
  ...readOrders("pima").map((order) => inOrder(pima, order)),
  ...[1, 2, 3, 4].map((seed) => drawLabelled(600, 5, seed)),
  oneSided(400),
  contrary(400),
];

/** Nothing but one label, then nothing but the other. */
function oneSided(count: number): Labelled {
  const { vectors } = drawLabelled(count, 3, 12);
  return { vectors, labels: vectors.map((_, n) => (n < count / 2 ? 1 : -1)) };
}

/** The label is always the one that the scorer thinks less likely. */
function contrary(count: number): Labelled {
  const { vectors } = drawLabelled(count, 3, 13);
  const scorer = createScorer({ dimension: 3 });
  const labels = vectors.map((x): 1 | -1 => {
    const label = scorer.score(x).logit > 0 ? -1 : 1;
    scorer.learn(x, label);
    return label;
  });
  return { vectors, labels };
}

const certified: Omit<ScorerOptions, "dimension">[] = [
  { method: "improper", regularization: 0.1 },
  { method: "improper" },
  { method: "improper", offset: -2 },
  // Within a small bound its first labels end in a projection, after which nothing is promised.
  { method: "improper", outcomeWeight: 1, marginBound: 16, weightBound: 1000 },
  { method: "gradient", weightBound: 4 },
  { method: "gradient", weightBound: 2, offset: 1 },
  { method: "newton", curvature: "theory", weightBound: 1, featureBound: 2 },
  { method: "aggregate" },
];

describe.each(certified)("%o", (options) => {
  test("the live certificate is never below the regret against any weights it covers", () => {
    let held = 0;
    for (const set of sets) {
      const dimension = set.vectors[0]?.length ?? 0;
      const scorer = createScorer({ dimension, ...options });
      const offset = options.offset ?? 0;
      const bounded = { ...set, vectors: set.vectors.map((x) => scorer.place(x).vector) };
      const loss = learnAll(scorer, set);
      const certificate = scorer.certificate();
      if (certificate === null) continue;
      held += 1;
      const { weightBound = 0, regularization = 0 } = scorer.options;
      for (const bound of [0.5, 1, 2, 4, 8, 16].filter((value) => value <= weightBound)) {
        const best = bestInHindsight(bounded.vectors, set.labels, bound, offset).weights;
        const covered = coveredBy(options, bounded, best, offset, scorer);
        const regret = loss - judge(bounded, covered, offset).loss;
        expect(regret).toBeLessThanOrEqual(certificate);
        if (options.method !== "improper") continue;
        // Against these weights lambda·‖θ‖² stands for lambda·B², which makes the test a sharper one.
        const squared = covered.reduce((sum, weight) => sum + weight * weight, 0);
        expect(regret).toBeLessThanOrEqual(certificate - regularization * (weightBound ** 2 - squared));
      }
    }
    expect(held).toBeGreaterThan(sets.length / 2);
  });
});

function coveredBy(
  options: Omit<ScorerOptions, "dimension">,
  set: Labelled,
  weights: Float64Array,
  offset: number,
  scorer: Scorer,
): Float64Array {
  if (options.method === "gradient" || options.method === "newton") return weights;
  // The aggregate's certificate is the best of its experts', whose narrowest margin bound is 6.
  return withinMargin(set, weights, offset, scorer.options.marginBound ?? 6);
}

test("the sum of its terms keeps below (a/kappa)·d·log(1 + nR²kappa/(8·lambda·d))", () => {
  for (const [outcomeWeight, kappa, weightBound] of [
    [0.5, 1 / 4, 16],
    [1, 1 / 17, 1e6],
  ] as const) {
    for (const set of sets) {
      const d = set.vectors[0]?.length ?? 0;
      const scorer = createScorer({
        dimension: d,
        outcomeWeight,
        regularization: 0.1,
        weightBound,
        marginBound: kappa === 1 / 4 ? 6 : 16,
      });
      const start = scorer.certificate() as number;
      learnAll(scorer, set);
      const end = scorer.certificate();
      if (end === null) continue;
      const closed =
        (outcomeWeight / kappa) * d * Math.log(1 + (set.vectors.length * 16 * kappa) / (8 * 0.1 * d));
      expect(end - start).toBeLessThanOrEqual(closed);
    }
  }
});

test("gradient's certificate keeps below 1.5·D·G·√n", () => {
  for (const set of sets) {
    const scorer = createScorer({
      method: "gradient",
      dimension: set.vectors[0]?.length ?? 0,
      weightBound: 4,
    });
    learnAll(scorer, set);
    expect(scorer.certificate()).toBeLessThanOrEqual(1.5 * 8 * 4 * Math.sqrt(set.vectors.length));
  }
});

test("nothing is promised after a weighted label, a projection or with forgetting, nor by uncertified rules", () => {
  const next = seededNumbers(2);
  const x = Float64Array.of(next(), 1);
  const weighted = createScorer({ dimension: 2 });
  weighted.learn(x, 1);
  expect(weighted.certificate()).not.toBeNull();
  weighted.learn(x, 1, 2);
  expect(weighted.certificate()).toBeNull();
  weighted.learn(x, 1);
  expect(weighted.certificate()).toBeNull();
  const tight = createScorer({ dimension: 2, weightBound: 0.1 });
  expect(tight.certificate()).toBeCloseTo(0.5 * 0.01, 15);
  tight.learn(x, 1);
  expect(tight.certificate()).toBeNull();
  expect(createScorer({ dimension: 2, forgetting: 0.9 }).certificate()).toBeNull();
  for (const method of ["newton", "implicit", "leader"] as const) {
    expect(createScorer({ dimension: 2, method }).certificate()).toBeNull();
  }
});
