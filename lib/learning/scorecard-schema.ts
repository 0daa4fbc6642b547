import { z } from "zod";
import { METHODS } from "../scorer";

const Coordinate = z.strictObject({
  index: z.int().describe("Place in the vector, from 0"),
  measure: z
    .string()
    .describe("What v stands for in the formula; of a signal of the team's own the formula that they wrote"),
  formula: z.string().describe("The coordinate, in [−1, 1], from v; `functions` says what the names mean"),
  role: z
    .enum(["scale", "hinge"])
    .describe("The measure on its scale, or what it has beyond a threshold: 0 up to it"),
});

export const ScorecardSignal = z.strictObject({
  key: z.string(),
  name: z.string(),
  sentence: z.string(),
  source: z.enum(["catalogue", "own"]).describe("Built in, or a formula of the team's own"),
  needs: z
    .array(z.string())
    .describe(
      "Fields of the payment without which the signal is not available: all its coordinates are then 0",
    ),
  coordinates: z.array(Coordinate),
});

/** One linear scorer of the mixture; most methods have a single one. */
const Part = z.strictObject({
  share: z.number().describe("Weight of the part's probability in the mixture; the shares add up to 1"),
  weights: z.array(z.number()).describe("One for each coordinate, in nats"),
  outcomeWeight: z
    .number()
    .describe("a: how strongly the score is pulled toward even odds for lack of experience; 0: not at all"),
  triangle: z
    .array(z.number())
    .nullable()
    .describe(
      "The symmetric matrix P, row by row up to the diagonal: entry (i, j), j ≤ i, stands at i(i+1)/2 + j. Null where nothing is held back; the leverage s is then 0",
    ),
});

/** A frozen scorer with all that a payment system needs to give its scores, and an example to check them by. */
export const ScorecardView = z
  .strictObject({
    format: z.literal(1).describe("Of this document"),
    exportedAt: z.iso.datetime(),
    scorer: z.strictObject({
      name: z.string(),
      version: z.int(),
      method: z.enum(METHODS),
      labels: z.int().describe("Labels it was learned from"),
    }),
    signalSetVersion: z
      .int()
      .describe("Scores of different sets do not compare: a card is for the signals it names and no others"),
    kind: z
      .enum(["averaged", "latest"])
      .describe("The mean of the weights as they stood before each label, or the state after the last label"),
    guarantee: z.string().describe("What is promised for the card's scores, in words"),
    certificate: z
      .number()
      .nullable()
      .describe("Upper bound on the scorer's regret so far, in nats, where the method has one"),
    regretPerLabel: z
      .number()
      .nullable()
      .describe(
        "Of averaged weights: the certificate divided by the labels, the most by which their expected loss exceeds the best fixed weights'; null where none is promised",
      ),
    evaluation: z.array(z.string()).describe("How a score is computed, step by step"),
    functions: z.record(z.string(), z.string()).describe("What the names in the formulas mean"),
    formulaFields: z
      .record(z.string(), z.string())
      .describe("What the names in formulas of the team's own stand for; empty where there are none"),
    dimension: z.int().describe("Length of the vector"),
    biasIndex: z.int().describe("The coordinate that is always 1"),
    featureBound: z.number().describe("R: a longer vector is scaled down to this length"),
    offset: z.number().describe("Log-odds of the base rate, in nats"),
    parts: z.array(Part),
    signals: z.array(ScorecardSignal),
    example: z
      .strictObject({
        coordinates: z.array(z.number()).describe("The vector of a stored payment"),
        parts: z.array(
          z.strictObject({
            evidence: z.number().describe("z₀, without the offset"),
            leverage: z.number().describe("s"),
            logOdds: z.number().describe("w"),
          }),
        ),
        logOdds: z.number().describe("In nats; decibans are 10/ln(10) times as many"),
        probability: z.number(),
      })
      .nullable()
      .describe(
        "What the card gives for one vector, to a relative error of about 1e-9; null before the first payment",
      ),
  })
  .describe(
    "A scorer frozen by online-to-batch conversion, for a payment system that scores on its own. It does not learn",
  );
export type ScorecardView = z.infer<typeof ScorecardView>;

export const ScorecardInput = z.strictObject({});
