export { DimensionError, LabelError, NotFiniteError, OptionsError, SnapshotError, StepError } from "./errors";
export { bestInHindsight, bestInHindsightInSteps, type Fit } from "./hindsight";
export { type LabelBound, labelBound } from "./label-bound";
export { logLoss, probabilityOf } from "./logistic";
export { scoreByCard } from "./scorecard";
export { createScorer, restoreScorer } from "./scorer";
export {
  type Explanation,
  type Label,
  type Learned,
  METHODS,
  type Method,
  type Move,
  type PartReading,
  type Placed,
  type Reading,
  type Score,
  type Scorecard,
  type ScorecardPart,
  type Scorer,
  type ScorerOptions,
  type Step,
} from "./types";
export { createWaiting, type Waiting } from "./waiting";
