import { expect, test } from "vitest";
import { bestInHindsight } from "@/lib/scorer";
import { birthWeight } from "./published";

// Hosmer and Lemeshow, Applied Logistic Regression (1989): low birth weight. R 4.2 glm(family = binomial) and
// statsmodels 0.13 agree to the digits shown; the book's own -111.286 and -111.630 are cited from memory.
const UNBOUNDED = 1e6;

const lossOf = ({ vectors, labels }: ReturnType<typeof birthWeight>) =>
  bestInHindsight(vectors, labels, UNBOUNDED).loss;

const NULL_LOSS = lossOf(birthWeight(() => []));

test("the constant alone has a deviance of 234.67199619", () => {
  expect(2 * NULL_LOSS).toBeCloseTo(234.67199619, 7);
});

test("eight terms have a deviance of 201.42695120, an AIC of 219.426951 and a likelihood ratio of 33.2450", () => {
  const loss = lossOf(birthWeight((r) => [r.age, r.lwt, ...r.race, r.smoke, r.ptl, r.ht, r.ui]));
  expect(2 * loss).toBeCloseTo(201.4269512, 7);
  expect(2 * loss + 2 * 9).toBeCloseTo(219.426951, 6);
  expect(2 * (NULL_LOSS - loss)).toBeCloseTo(33.245, 4);
  expect(1 - loss / NULL_LOSS).toBeCloseTo(0.141666, 6);
});

test("leaving out age and visits costs a likelihood ratio of 0.686184, p 0.70957", () => {
  const larger = lossOf(birthWeight((r) => [r.age, r.lwt, ...r.race, r.ftv]));
  const smaller = lossOf(birthWeight((r) => [r.lwt, ...r.race]));
  expect(larger).toBeCloseTo(111.286453, 6);
  expect(smaller).toBeCloseTo(111.629545, 6);
  const ratio = 2 * (smaller - larger);
  expect(ratio).toBeCloseTo(0.686184, 5);
  // Chi-squared with two degrees of freedom is exponential.
  expect(Math.exp(-ratio / 2)).toBeCloseTo(0.70957, 5);
});

test("the eight terms put 139 of 189 births on the right side of one half, and give the first five these chances", () => {
  const { vectors, labels } = birthWeight((r) => [r.age, r.lwt, ...r.race, r.smoke, r.ptl, r.ht, r.ui]);
  const { weights } = bestInHindsight(vectors, labels, UNBOUNDED);
  const chances = vectors.map(
    (x) => 1 / (1 + Math.exp(-x.reduce((sum, value, i) => sum + value * (weights[i] as number), 0))),
  );
  [0.3118825, 0.12779896, 0.32129819, 0.48454662, 0.50863881].forEach((chance, i) => {
    expect(chances[i]).toBeCloseTo(chance, 8);
  });
  const counts = { negative: 0, falsePositive: 0, falseNegative: 0, positive: 0 };
  chances.forEach((chance, i) => {
    const low = labels[i] === 1;
    counts[chance > 0.5 ? (low ? "positive" : "falsePositive") : low ? "falseNegative" : "negative"] += 1;
  });
  expect(counts).toEqual({ negative: 118, falsePositive: 12, falseNegative: 38, positive: 21 });
});
