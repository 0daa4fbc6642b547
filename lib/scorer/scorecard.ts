import { probabilityOf } from "./logistic";
import type { ResolvedOptions } from "./options";
import { partLogit, readLogit } from "./reading";
import type { Rule } from "./rule";
import { multiply } from "./triangle";
import type { PartReading, Scorecard } from "./types";
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

/** What one part of a card makes of a vector. */
export interface CardPartScore {
  /** z0, without the offset. */
  rawEvidence: number;
  /** s; 0 where the part holds nothing back. */
  leverage: number;
  logit: number;
}

/** The frozen score of a vector; also the reference for whoever computes it elsewhere. */
export function scoreByCard(
  card: Scorecard,
  x: Float64Array,
): { logit: number; probability: number; parts: CardPartScore[] } {
  const vector = withinLength(x, card.featureBound);
  const u = new Float64Array(vector.length);
  const readings = card.parts.map(({ outcomeWeight, share }) => ({ outcomeWeight, share, remembers: true }));
  const parts = card.parts.map(({ weights, triangle }, k) => {
    const rawEvidence = dot(Float64Array.from(weights), vector);
    if (triangle !== null) multiply(Float64Array.from(triangle), vector, u);
    const leverage = triangle === null ? 0 : Math.max(0, dot(vector, u));
    const logit = partLogit(readings[k] as PartReading, card.offset, rawEvidence, leverage);
    return { rawEvidence, leverage, logit };
  });
  const places = Float64Array.from(parts.flatMap(({ rawEvidence, leverage }) => [rawEvidence, leverage]));
  const logit = readLogit({ offset: card.offset, parts: readings }, places);
  return { logit, probability: probabilityOf(logit), parts };
}
