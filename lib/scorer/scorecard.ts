import { probabilityOf } from "./logistic";
import type { ResolvedOptions } from "./options";
import { readLogit } from "./reading";
import type { Rule } from "./rule";
import { multiply } from "./triangle";
import type { Scorecard } from "./types";
import { dot, withinLength } from "./vector";

const AVERAGED =
  "Averaged weights. If cases come independently from one distribution and every label counts once, their expected " +
  "loss on a new case is at most that of the best fixed weights within the bound plus the regret divided by the " +
  "number of labels. No promise when fraud patterns change.";
const LATEST =
  "The state after the last label. The certificate covers the scores given while learning label by label; for " +
  "frozen scores on new cases nothing is proven. They equal what the scorer itself would give now.";

/**
 * Online to batch: rules with linear scores are frozen as the running average of their weights, which carries the
 * guarantee of Cesa-Bianchi, Conconi, Gentile (2004); the others (`improper`, `aggregate`), whose scores are not
 * linear in the vector, as the latest state, without one.
 */
export function freezeScorecard(rule: Rule, options: ResolvedOptions, labels: number): Scorecard {
  const averaged = rule.averagedWeights?.();
  return {
    kind: averaged ? "averaged" : "latest",
    guarantee: averaged ? AVERAGED : LATEST,
    certificate: rule.certificate(),
    labels,
    featureBound: options.featureBound,
    offset: options.offset,
    parts: averaged
      ? [{ weights: [...averaged], triangle: null, outcomeWeight: 0, share: 1 }]
      : rule.freeze(),
  };
}

/** The frozen score of a vector; also the reference for whoever computes it elsewhere. */
export function scoreByCard(card: Scorecard, x: Float64Array): { logit: number; probability: number } {
  const vector = withinLength(x, card.featureBound);
  const places = new Float64Array(2 * card.parts.length);
  const u = new Float64Array(vector.length);
  card.parts.forEach((part, k) => {
    places[2 * k] = dot(Float64Array.from(part.weights), vector);
    if (part.triangle === null) return;
    multiply(Float64Array.from(part.triangle), vector, u);
    places[2 * k + 1] = Math.max(0, dot(vector, u));
  });
  const parts = card.parts.map(({ outcomeWeight, share }) => ({ outcomeWeight, share, remembers: true }));
  const logit = readLogit({ offset: card.offset, parts }, places);
  return { logit, probability: probabilityOf(logit) };
}
