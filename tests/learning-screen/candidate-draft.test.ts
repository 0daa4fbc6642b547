import { expect, test } from "vitest";
import { CANDIDATE_METHODS, optionFields, readOptions } from "@/components/learning/candidate-draft";
import { METHOD_WORDS } from "@/components/learning/method-words";
import { createScorer } from "@/lib/scorer";

test.each(CANDIDATE_METHODS)(
  "the form says for %s what the scorer takes where a field is left empty",
  (method) => {
    const { options } = createScorer({ dimension: 3, method });
    for (const { key, initial } of optionFields(method)) expect(Number(initial), key).toBe(options[key]);
  },
);

test.each(CANDIDATE_METHODS)("%s takes every option that the form offers for it", (method) => {
  const draft = Object.fromEntries(optionFields(method).map(({ key, initial }) => [key, initial]));
  const { options, unreadable } = readOptions(method, draft);
  expect(unreadable).toEqual([]);
  expect(() => createScorer({ dimension: 3, method, ...options })).not.toThrow();
  expect(METHOD_WORDS[method].does).toMatch(/\.$/);
});

test("empty fields are left out, a comma is a point, and what is no number is named", () => {
  const draft = { regularization: "0,25", weightBound: "", forgetting: "most", featureBound: " 3 " };
  expect(readOptions("implicit", draft)).toEqual({
    options: { regularization: 0.25, featureBound: 3 },
    unreadable: ["forgetting"],
  });
});

test("what was typed for another method does not go along", () => {
  expect(readOptions("gradient", { regularization: "1", weightBound: "8" }).options).toEqual({
    weightBound: 8,
  });
});
