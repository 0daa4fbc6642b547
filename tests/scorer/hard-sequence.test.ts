import { expect, test } from "vitest";
import { bestInHindsight, createScorer, type Scorer, type ScorerOptions } from "@/lib/scorer";
import { type Labelled, seededNumbers } from "./fixture";

/**
 * The sequence on which proper learners (those that predict with fixed weights within the bound) must lose as a power
 * of n, after Hazan, Koren, Levy, "Logistic regression: tight bounds for stochastic and online optimization", 2014;
 * its constants are reconstructed here, not copied from the paper.
 */
function hardSequence(count: number, seed: number): Labelled {
  const bound = Math.log(count);
  const rare = (2 / bound) ** (2 / 3) * count ** (-1 / 3);
  const tilt = (seed % 2 === 0 ? 1 : -1) * 0.5 * Math.sqrt(rare / count);
  const small = smallStep(rare, 0.75 * bound);
  const next = seededNumbers(seed);
  const vectors: Float64Array[] = [];
  const labels: (1 | -1)[] = [];
  for (let n = 0; n < count; n++) {
    const sign = next() < 0.5 ? 1 : -1;
    const contrary = next() < rare + tilt;
    vectors.push(Float64Array.of(contrary ? sign : sign * small));
    labels.push((contrary ? -sign : sign) as 1 | -1);
  }
  return { vectors, labels };
}

/** The root c of q·sigma(w) = (1 - q)·c·sigma(-c·w) below 1.2785/w, where the right side still rises. */
function smallStep(q: number, w: number): number {
  const sigma = (z: number) => 1 / (1 + Math.exp(-z));
  let low = 0;
  let high = 1.2785 / w;
  for (let round = 0; round < 100; round++) {
    const c = (low + high) / 2;
    if ((1 - q) * c * sigma(-c * w) < q * sigma(w)) low = c;
    else high = c;
  }
  return low;
}

const SIZES = [1000, 10_000, 100_000] as const;
const RUNS = 8;

/** The sequences, each with the loss of its best weights in hindsight. */
const sequences = SIZES.map((count) =>
  Array.from({ length: RUNS }, (_, run) => {
    const sequence = hardSequence(count, 100 + run);
    return { ...sequence, best: bestInHindsight(sequence.vectors, sequence.labels, Math.log(count)).loss };
  }),
);

/** Mean regret of a rule at each size, each run checked against the rule's certificate by `check`. */
function meanRegrets(
  optionsAt: (bound: number) => Partial<ScorerOptions>,
  check: (regret: number, scorer: Scorer, count: number) => void = () => {},
): number[] {
  return SIZES.map((count, k) => {
    const bound = Math.log(count);
    let total = 0;
    for (const { vectors, labels, best } of sequences[k] ?? []) {
      const scorer = createScorer({ dimension: 1, weightBound: bound, featureBound: 1, ...optionsAt(bound) });
      let loss = 0;
      vectors.forEach((x, n) => {
        loss += scorer.learn(x, labels[n] as 1 | -1).loss;
      });
      check(loss - best, scorer, count);
      total += loss - best;
    }
    return total / RUNS;
  });
}

const REGULARIZATION = 0.1;

/** What the improper rule promises at this size: a power of log n, since the bound is log n itself. */
function promised(outcomeWeight: number, count: number): number {
  const bound = Math.log(count);
  const kappa = 1 / (1 + outcomeWeight * bound);
  return (
    REGULARIZATION * bound ** 2 +
    (outcomeWeight / kappa) * Math.log(1 + (count * kappa) / (8 * REGULARIZATION))
  );
}

test("gradient's regret grows like the cube root of n: by 2.15 for every tenfold, within half and double", () => {
  const regrets = meanRegrets(() => ({ method: "gradient" }));
  for (const k of [1, 2]) {
    const growth = (regrets[k] as number) / (regrets[k - 1] as number);
    expect(growth).toBeGreaterThan(10 ** (1 / 3) / 2);
    expect(growth).toBeLessThan(10 ** (1 / 3) * 2);
  }
  // Beyond what the improper rule promises: the promise below tells a power of n from a power of log n.
  expect(regrets[2]).toBeGreaterThan(promised(0.5, SIZES[2]));
});

test.each([0.5, 1] as const)(
  "improper with outcome weight %d: regret below a/kappa·log(1 + n·kappa/(8·lambda)) + lambda·B², a power of log n",
  (outcomeWeight) => {
    const regrets = meanRegrets(
      (bound) => ({ outcomeWeight, marginBound: bound, regularization: REGULARIZATION }),
      (regret, scorer, count) => {
        expect(regret).toBeLessThanOrEqual(promised(outcomeWeight, count));
        const certificate = scorer.certificate();
        if (certificate !== null) expect(regret).toBeLessThanOrEqual(certificate);
      },
    );
    // In fact it ends below the best fixed weights, further the longer the sequence.
    for (const regret of regrets) expect(regret).toBeLessThan(0);
    expect(regrets[2]).toBeLessThan(regrets[0] as number);
  },
);

test("online Newton with the theory's constants pays for e to the bound", () => {
  const regrets = meanRegrets(
    () => ({ method: "newton", curvature: "theory" }),
    (regret, scorer) => {
      expect(regret).toBeLessThanOrEqual(scorer.certificate() as number);
    },
  );
  expect(regrets[0]).toBeGreaterThan(25);
  expect(regrets[2]).toBeGreaterThan(200);
});
