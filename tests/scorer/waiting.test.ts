import fc from "fast-check";
import { describe, expect, test } from "vitest";
import {
  createScorer,
  createWaiting,
  DimensionError,
  type Label,
  type ScorerOptions,
  StepError,
  type Waiting,
} from "@/lib/scorer";
import { anyLabels, anyOptions, anyVector } from "./arbitraries";
import { drawLabelled, type Labelled } from "./fixture";

const DIMENSION = 12;
const cases = drawLabelled(203, DIMENSION, 8).vectors;
const stream = drawLabelled(4000, DIMENSION, 9);

const exactMethods: Omit<ScorerOptions, "dimension">[] = [
  { method: "improper" },
  { method: "improper", outcomeWeight: 1, regularization: 0.05 },
  { method: "improper", offset: -4 },
  // So tight a bound that most labels end in a projection.
  { method: "improper", weightBound: 1.5 },
  { method: "implicit", regularization: 0.1 },
  { method: "newton", weightBound: 2 },
  { method: "gradient", weightBound: 2 },
  { method: "aggregate", offset: -3 },
];

function follow(options: Omit<ScorerOptions, "dimension">, { vectors, labels }: Labelled, chunk: number) {
  const scorer = createScorer({ dimension: DIMENSION, ...options });
  const waiting = createWaiting(DIMENSION, 0, scorer.reading().parts.length);
  for (const x of cases) waiting.add(x, scorer);
  vectors.forEach((x, n) => {
    const { step } = scorer.learn(x, labels[n] as Label);
    for (let from = 0; from < waiting.end; from += chunk) {
      waiting.advanceRange(step, from, from + chunk);
      waiting.rootsRange(step.reading, from, from + chunk);
    }
  });
  return { scorer, waiting };
}

describe.each(exactMethods)("%o", (options) => {
  test("cases brought forward through 4,000 labels stand where computing afresh puts them, to 1e-9", () => {
    const { scorer, waiting } = follow(options, stream, 1000);
    cases.forEach((x, slot) => {
      const score = scorer.score(x);
      expect(Math.abs(waiting.logit(slot) - score.logit)).toBeLessThan(1e-9);
      expect(Math.abs(waiting.rawEvidence(slot) - score.rawEvidence)).toBeLessThan(1e-9);
      // The mixture's leverage leaves out its forgetting expert, so it follows exactly too.
      expect(Math.abs(waiting.leverage(slot) - score.leverage)).toBeLessThan(1e-9);
    });
    waiting.recompute(scorer);
    cases.forEach((x, slot) => {
      expect(waiting.logit(slot)).toBe(scorer.score(x).logit);
    });
  });

  test("how the slots are cut into chunks makes no difference to any bit", () => {
    const short = { vectors: stream.vectors.slice(0, 200), labels: stream.labels.slice(0, 200) };
    const whole = follow(options, short, 1000).waiting.logits;
    for (const chunk of [1, 3, 64]) expect(follow(options, short, chunk).waiting.logits).toEqual(whole);
  });
});

test("cases may come, change and go between and within steps; each takes each step once", () => {
  const act = fc.oneof(
    fc.record({ kind: fc.constant("add" as const), x: anyVector }),
    fc.record({ kind: fc.constant("replace" as const), x: anyVector, pick: fc.nat() }),
    fc.record({ kind: fc.constant("remove" as const), pick: fc.nat() }),
    fc.record({
      kind: fc.constant("learn" as const),
      x: anyVector,
      label: fc.constantFrom<Label>(1, -1),
      cut: fc.nat(8),
      during: anyVector,
    }),
  );
  fc.assert(
    fc.property(anyOptions, anyLabels, fc.array(act, { maxLength: 40 }), (options, labels, acts) => {
      const scorer = createScorer(options);
      for (const { x, label } of labels) scorer.learn(x, label);
      const waiting = createWaiting(options.dimension, 2, scorer.reading().parts.length);
      const held = new Map<number, Float64Array>();
      const add = (x: Float64Array) => {
        const slot = waiting.add(x, scorer);
        expect(held.has(slot)).toBe(false);
        held.set(slot, x);
      };
      for (const one of acts) {
        const chosen =
          one.kind === "replace" || one.kind === "remove"
            ? [...held.keys()][one.pick % Math.max(1, held.size)]
            : undefined;
        if (one.kind === "add") add(one.x);
        else if (one.kind === "replace" && chosen !== undefined) {
          waiting.replace(chosen, one.x, scorer);
          held.set(chosen, one.x);
        } else if (one.kind === "remove" && chosen !== undefined) {
          waiting.remove(chosen);
          held.delete(chosen);
          expect(waiting.holds(chosen)).toBe(false);
        } else if (one.kind === "learn") {
          const { step } = scorer.learn(one.x, one.label);
          if (!step.exact) {
            expect(() => waiting.advance(step)).toThrow(StepError);
            waiting.recompute(scorer);
          } else {
            waiting.advanceRange(step, 0, one.cut);
            add(one.during);
            waiting.advance(step);
            // A second delivery of the same step changes nothing.
            waiting.advance(step);
          }
        }
      }
      expect(waiting.size).toBe(held.size);
      for (const [slot, x] of held) {
        const score = scorer.score(x);
        expect(Math.abs(waiting.logit(slot) - score.logit)).toBeLessThan(1e-9);
        expect(Math.abs(waiting.leverage(slot) - score.leverage)).toBeLessThan(1e-9);
      }
    }),
    { seed: 99, numRuns: 300 },
  );
});

test("a case that missed a step is refused by slot, and nothing moves", () => {
  const scorer = createScorer({ dimension: DIMENSION });
  const waiting = createWaiting(DIMENSION);
  for (const x of cases.slice(0, 5)) waiting.add(x, scorer);
  const first = scorer.learn(stream.vectors[0] as Float64Array, 1).step;
  const second = scorer.learn(stream.vectors[1] as Float64Array, -1).step;
  const before = [...waiting.logits];
  expect(() => waiting.advance(second)).toThrow(StepError);
  expect([...waiting.logits]).toEqual(before);
  waiting.advance(first);
  waiting.advance(second);
  expect(waiting.logit(3)).toBeCloseTo(scorer.score(cases[3] as Float64Array).logit, 12);
});

test("scorers and steps of another shape, and empty slots, are refused", () => {
  const waiting: Waiting = createWaiting(2);
  const scorer = createScorer({ dimension: 2 });
  const slot = waiting.add(Float64Array.of(1, 2), scorer);
  expect(() => waiting.add(Float64Array.of(1, 2), createScorer({ dimension: 3 }))).toThrow(DimensionError);
  expect(() =>
    waiting.add(Float64Array.of(1, 2), createScorer({ dimension: 2, method: "aggregate" })),
  ).toThrow(DimensionError);
  expect(() => waiting.add(Float64Array.of(1), scorer)).toThrow(DimensionError);
  const other = createScorer({ dimension: 2, method: "aggregate" }).learn(Float64Array.of(1, 1), 1).step;
  expect(() => waiting.advance(other)).toThrow(DimensionError);
  waiting.remove(slot);
  expect(() => waiting.remove(slot)).toThrow(RangeError);
  expect(() => waiting.replace(slot, Float64Array.of(1, 2), scorer)).toThrow(RangeError);
  expect(waiting.size).toBe(0);
});
