import fc from "fast-check";
import type { Label, ScorerOptions } from "@/lib/scorer";

const DIMENSION = 4;

/** Every method, with options in the range people use. */
export const anyOptions: fc.Arbitrary<ScorerOptions> = fc
  .record({
    variant: fc.constantFrom<Omit<ScorerOptions, "dimension">>(
      { method: "improper" },
      { method: "improper", outcomeWeight: 1, regularization: 0.1 },
      { method: "improper", forgetting: 0.99 },
      { method: "implicit", regularization: 0.1 },
      { method: "implicit", linearization: "prior", forgetting: 0.95 },
      { method: "newton" },
      { method: "newton", curvature: "theory" },
      { method: "gradient" },
      { method: "leader", refitEvery: 5 },
      { method: "aggregate" },
    ),
    // Bounds small enough that projection and scaling happen in many runs.
    weightBound: fc.double({ min: 0.3, max: 16, noNaN: true }),
    featureBound: fc.double({ min: 0.5, max: 4, noNaN: true }),
    offset: fc.double({ min: -5, max: 5, noNaN: true }),
  })
  .map(({ variant, ...bounds }) => ({ dimension: DIMENSION, ...variant, ...bounds }));

export const anyVector: fc.Arbitrary<Float64Array> = fc
  .array(fc.double({ min: -3, max: 3, noNaN: true }), { minLength: DIMENSION, maxLength: DIMENSION })
  .map((entries) => Float64Array.from(entries));

export interface LabelledVector {
  x: Float64Array;
  label: Label;
  weight: number;
}

export const anyLabels: fc.Arbitrary<LabelledVector[]> = fc.array(
  fc.record({
    x: anyVector,
    label: fc.constantFrom<Label>(1, -1),
    weight: fc.oneof({ weight: 4, arbitrary: fc.constant(1) }, fc.double({ min: 0, max: 5, noNaN: true })),
  }),
  { maxLength: 30 },
);
