import { expect, test } from "vitest";
import {
  createScorer,
  METHODS,
  OptionsError,
  restoreScorer,
  type ScorerOptions,
  SnapshotError,
} from "@/lib/scorer";
import { drawLabelled } from "./fixture";

function trained(options: ScorerOptions) {
  const scorer = createScorer(options);
  const { vectors, labels } = drawLabelled(30, options.dimension, 3);
  vectors.forEach((x, n) => {
    scorer.learn(x, labels[n] as 1 | -1);
  });
  return scorer;
}

test("P is stored as one triangle: 17.3 kB at 64 signals", () => {
  const { length } = trained({ dimension: 64 }).snapshot();
  expect(length).toBe(24 + 8 * (11 + 64 + (64 * 65) / 2 + 2) + 4);
});

test.each(METHODS)("%s: a snapshot cut anywhere, or with any one byte changed, is refused", (method) => {
  const bytes = trained({ dimension: 3, method }).snapshot();
  for (let end = 0; end < bytes.length; end++) {
    expect(() => restoreScorer(bytes.subarray(0, end))).toThrow(SnapshotError);
  }
  for (let at = 0; at < bytes.length; at++) {
    const harmed = bytes.slice();
    harmed[at] = (harmed[at] as number) ^ (1 << (at % 8));
    expect(() => restoreScorer(harmed)).toThrow(SnapshotError);
  }
  const longer = new Uint8Array(bytes.length + 8);
  longer.set(bytes);
  expect(() => restoreScorer(longer)).toThrow(SnapshotError);
});

test("a snapshot read from the middle of a larger buffer restores", () => {
  const scorer = trained({ dimension: 3 });
  const bytes = scorer.snapshot();
  const larger = new Uint8Array(bytes.length + 20);
  larger.set(bytes, 3);
  expect(restoreScorer(larger.subarray(3, 3 + bytes.length)).snapshot()).toEqual(bytes);
});

test("what is not bytes is refused", () => {
  expect(() => restoreScorer("CUPELSCR" as never)).toThrow(SnapshotError);
  expect(() => restoreScorer(undefined as never)).toThrow(SnapshotError);
});

test("a snapshot leaves the scorer as it was, and does not follow it", () => {
  const scorer = trained({ dimension: 3 });
  const first = scorer.snapshot();
  expect(scorer.snapshot()).toEqual(first);
  const copy = first.slice();
  scorer.learn(Float64Array.of(1, 0, 1), 1);
  expect(first).toEqual(copy);
  expect(scorer.snapshot()).not.toEqual(first);
});

test.each<[Partial<ScorerOptions>, string]>([
  [{ dimension: 0 }, "dimension"],
  [{ dimension: 2.5 }, "dimension"],
  [{ method: "guess" as never }, "method"],
  [{ weightBound: 0 }, "weightBound"],
  [{ featureBound: Number.POSITIVE_INFINITY }, "featureBound"],
  [{ marginBound: -1 }, "marginBound"],
  [{ regularization: 0 }, "regularization"],
  [{ outcomeWeight: 0.7 }, "outcomeWeight"],
  [{ offset: Number.NaN }, "offset"],
  [{ forgetting: 0 }, "forgetting"],
  [{ forgetting: 1.1 }, "forgetting"],
  [{ method: "implicit", linearization: "here" as never }, "linearization"],
  [{ method: "newton", curvature: 0 }, "curvature"],
  [{ method: "newton", curvature: "theory", weightBound: 1000 }, "curvature"],
  [{ method: "leader", refitEvery: 0 }, "refitEvery"],
  [{ method: "gradient", forgetting: 0.9 }, "forgetting"],
  [{ method: "implicit", marginBound: 6 }, "marginBound"],
  [{ method: "aggregate", regularization: 0.1 }, "regularization"],
])("options %o are refused, naming %s", (options, named) => {
  const create = () => createScorer({ dimension: 3, ...options });
  expect(create).toThrow(OptionsError);
  expect(create).toThrow(named);
});

test("the options told are complete and make the same scorer again", () => {
  for (const method of METHODS) {
    const scorer = createScorer({ dimension: 5, method, offset: -3 });
    const { options } = scorer;
    expect(options.weightBound).toBe(16);
    expect(options.featureBound).toBe(4);
    expect(createScorer(options).snapshot()).toEqual(scorer.snapshot());
  }
  expect(createScorer({ dimension: 5 }).options).toEqual({
    dimension: 5,
    method: "improper",
    weightBound: 16,
    featureBound: 4,
    marginBound: 6,
    regularization: 0.5,
    outcomeWeight: 0.5,
    offset: 0,
    forgetting: 1,
  });
});
