import { ApprovalView } from "../approvals/schema";
import type { EndpointTable } from "../endpoint";
import { DriftInput, DriftSeenInput, DriftView } from "./drift-schema";
import {
  InfluenceInput,
  InfluenceView,
  RemovalInput,
  RemovalPreview,
  RemovalPreviewInput,
} from "./influence-schema";
import {
  CandidateInput,
  CandidateView,
  DropInput,
  LearningInput,
  LearningView,
  PromotionInput,
} from "./learning-schema";
import { PassedInput, PassedView } from "./passed-schema";
import { ScorerInput, ScorerView } from "./schema";
import { ScorecardInput, ScorecardView } from "./scorecard-schema";

export const learningEndpoints = {
  "GET /api/scorer": {
    summary: "The scorer in use: its bounds, its losses and the weights of every signal",
    may: "scorer.read",
    input: ScorerInput,
    output: ScorerView,
  },
  "GET /api/scorer/scorecard": {
    summary: "The scorer in use, frozen, with the definitions of its signals and an example to check by",
    may: "scorer.read",
    input: ScorecardInput,
    output: ScorecardView,
  },
  "GET /api/learning": {
    summary: "The scorer in use and the candidates beside it, judged on the same labels",
    may: "scorer.read",
    input: LearningInput,
    output: LearningView,
  },
  "POST /api/scorers": {
    summary: "Adds a candidate that runs beside the scorer in use, from the first label on",
    may: "scorer.manage",
    input: CandidateInput,
    output: CandidateView,
    status: 201,
  },
  "POST /api/scorers/{id}/drop": {
    summary: "Ends a candidate",
    may: "scorer.manage",
    input: DropInput,
    output: null,
    status: 204,
  },
  "POST /api/scorers/{id}/promotion": {
    summary: "Proposes that a candidate takes the place of the scorer in use; a second person approves it",
    may: "scorer.manage",
    input: PromotionInput,
    output: ApprovalView,
    status: 201,
  },
  "GET /api/learning/influence": {
    summary: "What each person's labels do to the scorer in use; while it is reckoned anew, the last figures",
    may: "influence.read",
    input: InfluenceInput,
    output: InfluenceView,
  },
  "GET /api/learning/removals/preview": {
    summary: "What removing one person's labels would do to the scorer in use",
    may: "approvals.settle",
    input: RemovalPreviewInput,
    output: RemovalPreview,
  },
  "POST /api/learning/removals": {
    summary: "Proposes that one person's labels are taken out of the scorer; a second person approves it",
    may: "scorer.manage",
    input: RemovalInput,
    output: ApprovalView,
    status: 201,
  },
  "GET /api/learning/drift": {
    summary: "Whether recent labels are what the scores promised, and the warnings there have been",
    may: "scorer.read",
    input: DriftInput,
    output: DriftView,
  },
  "POST /api/learning/drift/{id}/seen": {
    summary: "Says that a warning has been seen; the same statistic can warn again from there on",
    may: "scorer.manage",
    input: DriftSeenInput,
    output: null,
    status: 204,
  },
  "GET /api/learning/passed": {
    summary: "Fraud among the payments below the review threshold, estimated from the random sample of them",
    may: "scorer.read",
    input: PassedInput,
    output: PassedView,
  },
} as const satisfies EndpointTable;
