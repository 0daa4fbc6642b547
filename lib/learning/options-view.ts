import type { ScorerOptions } from "../scorer";
import type { ScorerOptionsView } from "./learning-schema";

/** As kept with a scorer, every default filled in. */
export function optionsView(options: Readonly<ScorerOptions>): ScorerOptionsView {
  return {
    weightBound: options.weightBound ?? 0,
    featureBound: options.featureBound ?? 0,
    marginBound: options.marginBound ?? null,
    regularization: options.regularization ?? null,
    outcomeWeight: options.outcomeWeight ?? null,
    forgetting: options.forgetting ?? null,
    offset: options.offset ?? 0,
  };
}
