import type { EndpointTable } from "../endpoint";
import {
  DecisionRecordInput,
  DecisionRecordView,
  DerivationInput,
  DerivationView,
  ScoresInput,
  ScoresView,
} from "./schema";

export const auditEndpoints = {
  "GET /api/trail/decisions/{id}": {
    summary: "One decision as it was: what was shown, under which policy, by which scorer",
    may: "trail.own",
    input: DecisionRecordInput,
    output: DecisionRecordView,
  },
  "GET /api/cases/{id}/scores": {
    summary: "Every score that the case's payment was given, and by which scorer under which policy",
    may: "cases.read",
    input: ScoresInput,
    output: ScoresView,
  },
  "GET /api/cases/{id}/scores/{scoreId}/derivation": {
    summary: "One of those scores derived again: the label log folded as of its scorer's version",
    may: "trail.own",
    input: DerivationInput,
    output: DerivationView,
  },
} as const satisfies EndpointTable;
