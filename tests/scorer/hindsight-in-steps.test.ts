import { expect, test } from "vitest";
import { Chance } from "@/db/demo/random";
import { bestInHindsight, bestInHindsightInSteps, DimensionError, type Label } from "@/lib/scorer";

const chance = new Chance(17);
const vectors = Array.from({ length: 3_000 }, () =>
  Float64Array.from({ length: 40 }, () => 2 * chance.unit() - 1),
);
const labels = vectors.map(
  (x): Label => (chance.hits(1 / (1 + Math.exp(2 - 3 * (x[0] as number)))) ? 1 : -1),
);

function drive(steps: ReturnType<typeof bestInHindsightInSteps>) {
  for (let pauses = 0; ; pauses++) {
    const step = steps.next();
    if (step.done) return { ...step.value, pauses };
  }
}

test("hindsight with pauses is, bit for bit, hindsight without", () => {
  const whole = bestInHindsight(vectors, labels, 4, -1);
  const { pauses, ...paused } = drive(bestInHindsightInSteps(vectors, labels, 4, -1));
  expect(paused).toEqual(whole);
  expect(pauses).toBeGreaterThan(5);
});

test("from the best weights of half the log it comes to the same loss, sooner", () => {
  const { weights } = bestInHindsight(vectors.slice(0, 1_500), labels.slice(0, 1_500), 4, -1);
  const cold = drive(bestInHindsightInSteps(vectors, labels, 4, -1));
  const warm = drive(bestInHindsightInSteps(vectors, labels, 4, -1, weights));
  expect(warm.loss).toBeCloseTo(cold.loss, 9);
  expect(warm.pauses).toBeLessThanOrEqual(cold.pauses);
});

test("weights of another dimension are no start", () => {
  expect(() => drive(bestInHindsightInSteps(vectors, labels, 4, -1, new Float64Array(3)))).toThrow(
    DimensionError,
  );
});
