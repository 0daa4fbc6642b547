import type { EndpointTable } from "../endpoint";
import { OutcomesInput, OutcomesView } from "./schema";

export const outcomeEndpoints = {
  "POST /api/outcomes": {
    summary:
      "Takes 1 to 1000 outcomes in (disputes, reports, recoveries); answers one result for each, in order",
    may: "outcomes.send",
    input: OutcomesInput,
    output: OutcomesView,
  },
} as const satisfies EndpointTable;
