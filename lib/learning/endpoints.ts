import type { EndpointTable } from "../endpoint";
import { ScorerInput, ScorerView } from "./schema";

export const learningEndpoints = {
  "GET /api/scorer": {
    summary: "The scorer in use: its bounds, its losses and the weights of every signal",
    may: "scorer.read",
    input: ScorerInput,
    output: ScorerView,
  },
} as const satisfies EndpointTable;
