import { z } from "zod";

export const ScorerView = z.strictObject({
  version: z.int(),
  method: z.string(),
  weightBound: z.number(),
  featureBound: z.number(),
  /** Labels in force: what the weights have been learned from. */
  decisions: z.int(),
  /** Sum in nats of the losses of the scores given before each label, as they were lived. */
  cumulativeLoss: z.number(),
  /** Loss in nats of the best fixed weights within the bound, over the first `hindsightLabels` labels in force. */
  hindsightLoss: z.number().nullable(),
  hindsightLabels: z.int().nullable(),
  /** What was lived up to that label beyond the loss in hindsight; null until it has been computed. */
  regret: z.number().nullable(),
  /** Log-odds of the base rate, in nats. */
  offset: z.number(),
  /** Upper bound on the regret so far in nats, where the method has one. */
  certificate: z.number().nullable(),
  signals: z.array(
    z.strictObject({
      key: z.string(),
      name: z.string(),
      /** One for each of the signal's coordinates, in nats at a reading of 1: its scale first, then its hinges. */
      weights: z.array(z.number()),
    }),
  ),
});
export type ScorerView = z.infer<typeof ScorerView>;

export const ScorerInput = z.strictObject({});
