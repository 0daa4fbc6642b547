import type { EndpointTable } from "../endpoint";
import { DecisionRecordInput, DecisionRecordView } from "./schema";

export const auditEndpoints = {
  "GET /api/trail/decisions/{id}": {
    summary: "One decision as it was: what was shown, under which policy, by which scorer",
    may: "trail.own",
    input: DecisionRecordInput,
    output: DecisionRecordView,
  },
} as const satisfies EndpointTable;
