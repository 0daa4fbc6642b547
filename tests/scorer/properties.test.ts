import fc from "fast-check";
import { expect, test } from "vitest";
import {
  createScorer,
  DimensionError,
  type Label,
  LabelError,
  NotFiniteError,
  restoreScorer,
  type Scorer,
  type ScorerOptions,
  scoreByCard,
} from "@/lib/scorer";
import { anyLabels, anyOptions, anyVector, type LabelledVector } from "./arbitraries";

const RUNS = { seed: 2026, numRuns: 200 };

function learnAll(scorer: Scorer, labels: readonly LabelledVector[]): Scorer {
  for (const { x, label, weight } of labels) scorer.learn(x, label, weight);
  return scorer;
}

test("a restored scorer is equal to the bit, and goes on so", () => {
  fc.assert(
    fc.property(anyOptions, anyLabels, anyLabels, anyVector, (options, before, after, x) => {
      const scorer = learnAll(createScorer(options), before);
      const bytes = scorer.snapshot();
      const restored = restoreScorer(bytes);
      expect(restored.snapshot()).toEqual(bytes);
      expect(restored.options).toEqual(scorer.options);
      expect(restored.labels).toBe(before.length);
      learnAll(scorer, after);
      learnAll(restored, after);
      expect(restored.snapshot()).toEqual(scorer.snapshot());
      expect(restored.explain(x)).toEqual(scorer.explain(x));
      expect(restored.certificate()).toBe(scorer.certificate());
    }),
    RUNS,
  );
});

test("a label undone by going back to the snapshot before it never happened", () => {
  fc.assert(
    fc.property(anyOptions, anyLabels, anyLabels, anyVector, (options, before, after, wrong) => {
      const scorer = learnAll(createScorer(options), before);
      const kept = scorer.snapshot();
      scorer.learn(wrong, 1);
      const undone = learnAll(restoreScorer(kept), after);
      const never = learnAll(createScorer(options), [...before, ...after]);
      expect(undone.snapshot()).toEqual(never.snapshot());
    }),
    RUNS,
  );
});

test("weights stay finite and within their bound, losses and leverages finite and not negative", () => {
  fc.assert(
    fc.property(anyOptions, anyLabels, anyVector, (options, labels, x) => {
      const scorer = createScorer(options);
      for (const { x: vector, label, weight } of labels) {
        const { loss } = scorer.learn(vector, label, weight);
        expect(Number.isFinite(loss) && loss >= 0).toBe(true);
        const weights = scorer.weights();
        expect(weights.every(Number.isFinite)).toBe(true);
        expect(Math.hypot(...weights)).toBeLessThanOrEqual((options.weightBound as number) * (1 + 1e-12));
      }
      const { probability, leverage } = scorer.score(x);
      expect(probability > 0 && probability < 1).toBe(true);
      expect(Number.isFinite(leverage) && leverage >= 0).toBe(true);
    }),
    RUNS,
  );
});

test("offset, contributions and pull add up to the log odds to 1e-9, and to the loss of the score given", () => {
  fc.assert(
    fc.property(
      anyOptions,
      anyLabels,
      anyVector,
      fc.constantFrom<Label>(1, -1),
      (options, labels, x, label) => {
        const scorer = learnAll(createScorer(options), labels);
        const told = scorer.explain(x);
        const sum = told.contributions.reduce((total, value) => total + value, told.offset) + told.pull;
        expect(Math.abs(sum - told.logit)).toBeLessThan(1e-9);
        expect(scorer.score(x).logit).toBe(told.logit);
        const learned = scorer.learn(x, label);
        expect(learned.logit).toBe(told.logit);
        expect(learned.loss).toBeCloseTo(-Math.log(label === 1 ? told.probability : 1 - told.probability), 6);
      },
    ),
    RUNS,
  );
});

test("the improper rule pulls its evidence toward even odds and never past them", () => {
  fc.assert(
    fc.property(anyLabels, anyVector, fc.constantFrom(0.5, 1), (labels, x, outcomeWeight) => {
      const scorer = learnAll(createScorer({ dimension: 4, outcomeWeight }), labels);
      const { logit, rawEvidence, leverage } = scorer.score(x);
      expect(Math.abs(logit)).toBeLessThanOrEqual(Math.abs(rawEvidence));
      expect(logit * rawEvidence).toBeGreaterThanOrEqual(0);
      expect(logit + outcomeWeight * leverage * Math.tanh(logit / 2)).toBeCloseTo(rawEvidence, 9);
    }),
    RUNS,
  );
});

test("a refused call says why and changes nothing", () => {
  const bad: { call: (scorer: Scorer) => unknown; error: new (message: string) => Error }[] = [
    { call: (s) => s.score(Float64Array.of(1, 2, 3)), error: DimensionError },
    { call: (s) => s.learn(new Float64Array(5), 1), error: DimensionError },
    { call: (s) => s.learn(Float64Array.of(1, 2, Number.NaN, 4), 1), error: NotFiniteError },
    { call: (s) => s.explain(Float64Array.of(Number.POSITIVE_INFINITY, 2, 3, 4)), error: NotFiniteError },
    { call: (s) => s.place(Float64Array.of(1, 2, 3, Number.NEGATIVE_INFINITY)), error: NotFiniteError },
    { call: (s) => s.learn(new Float64Array(4), 0 as Label), error: LabelError },
    { call: (s) => s.learn(new Float64Array(4), 1, -1), error: LabelError },
    { call: (s) => s.learn(new Float64Array(4), 1, Number.NaN), error: LabelError },
    { call: (s) => s.learn(new Float64Array(4), 1, Number.POSITIVE_INFINITY), error: LabelError },
  ];
  fc.assert(
    fc.property(anyOptions, anyLabels, fc.constantFrom(...bad), (options, labels, { call, error }) => {
      const scorer = learnAll(createScorer(options), labels);
      const before = scorer.snapshot();
      expect(() => call(scorer)).toThrow(error);
      expect(scorer.snapshot()).toEqual(before);
    }),
    RUNS,
  );
});

test("the caller's vectors are never written to, and later writes to them change nothing", () => {
  fc.assert(
    fc.property(anyOptions, anyLabels, anyVector, (options, labels, x) => {
      const scorer = learnAll(createScorer(options), labels);
      const twin = restoreScorer(scorer.snapshot());
      const lent = x.slice();
      scorer.learn(lent, 1);
      expect(lent).toEqual(x);
      lent.fill(9);
      twin.learn(x, 1);
      expect(scorer.snapshot()).toEqual(twin.snapshot());
    }),
    RUNS,
  );
});

test("a vector longer than the bound scores as the one scaled down to it, and says so", () => {
  const scorer = createScorer({ dimension: 2, featureBound: 5 });
  scorer.learn(Float64Array.of(1, 1), 1);
  const far = scorer.score(Float64Array.of(30, 40));
  expect(far.scaled).toBe(true);
  expect(far.logit).toBeCloseTo(scorer.score(Float64Array.of(3, 4)).logit, 14);
  expect(scorer.score(Float64Array.of(3, 4)).scaled).toBe(false);
  const huge = scorer.score(Float64Array.of(3e300, 4e300));
  expect(huge.logit).toBeCloseTo(far.logit, 14);
});

test("batches that share no signal may come in any order", () => {
  const beside = ({ x, ...rest }: LabelledVector, at: number): LabelledVector => {
    const wide = new Float64Array(2 * x.length);
    wide.set(x, at);
    return { x: wide, ...rest };
  };
  // Rules whose step depends on the number of labels, or that forget, have no such property; neither has a projection.
  const anyMethod = fc.constantFrom<Omit<ScorerOptions, "dimension">>(
    { method: "improper" },
    { method: "improper", outcomeWeight: 1, regularization: 0.1 },
    { method: "implicit", regularization: 0.1 },
    { method: "implicit", linearization: "prior" },
    { method: "newton" },
  );
  fc.assert(
    fc.property(anyMethod, anyLabels, anyLabels, anyVector, anyVector, (method, first, second, x, y) => {
      const left = first.map((one) => beside(one, 0));
      const right = second.map((one) => beside(one, 4));
      const options = { dimension: 8, offset: -2, ...method, weightBound: 1e6 };
      const one = learnAll(createScorer(options), [...left, ...right]);
      const other = learnAll(createScorer(options), [...right, ...left]);
      const probe = Float64Array.of(...x, ...y);
      expect(Math.abs(one.score(probe).logit - other.score(probe).logit)).toBeLessThan(1e-9);
      expect(Math.abs(one.score(probe).leverage - other.score(probe).leverage)).toBeLessThan(1e-9);
    }),
    RUNS,
  );
});

test("labels that share signals do not: an order that is lost cannot be made good", () => {
  const x = Float64Array.of(1, 1);
  const y = Float64Array.of(1, -0.5);
  const one = createScorer({ dimension: 2 });
  const other = createScorer({ dimension: 2 });
  one.learn(x, 1);
  one.learn(y, -1);
  other.learn(y, -1);
  other.learn(x, 1);
  expect(Math.abs(one.score(x).logit - other.score(x).logit)).toBeGreaterThan(1e-3);
});

test("a scorecard is plain JSON and, where it is the latest state, scores as the scorer does", () => {
  fc.assert(
    fc.property(anyOptions, anyLabels, anyVector, (options, labels, x) => {
      const scorer = learnAll(createScorer(options), labels);
      const text = JSON.stringify(scorer.scorecard());
      const card = JSON.parse(text);
      expect(JSON.stringify(card)).toBe(text);
      const { logit, probability } = scoreByCard(card, x);
      expect(probability > 0 && probability < 1).toBe(true);
      if (card.kind === "latest") expect(logit).toBe(scorer.score(x).logit);
    }),
    RUNS,
  );
});
