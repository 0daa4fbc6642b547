import type { ScorerOptionsView } from "@/lib/learning/learning-schema";

/** Options that tell scorers of one method apart, in one line: "regularisation 0.5, bound 16". */
export function optionsText(options: ScorerOptionsView): string {
  const { regularization, weightBound, outcomeWeight, forgetting } = options;
  const parts = [
    regularization !== null && `regularisation ${regularization}`,
    `bound ${weightBound}`,
    outcomeWeight === 1 && "both answers in full",
    forgetting !== null && forgetting < 1 && `memory ${forgetting}`,
  ];
  return parts.filter((part) => part !== false).join(", ");
}
