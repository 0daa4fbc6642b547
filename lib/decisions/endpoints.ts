import type { EndpointTable } from "../endpoint";
import { CorrectionInput, DecideInput, DecideView, RelearnView, UndoInput } from "./schema";

export const decisionEndpoints = {
  "POST /api/cases/{id}/decision": {
    summary: "Gives the verdict on a case, and on others of the same account in the same act",
    may: "desk.work",
    input: DecideInput,
    output: DecideView,
  },
  "POST /api/cases/{id}/undo": {
    summary: "Takes back one's own last decision within the grace period",
    may: "desk.work",
    input: UndoInput,
    output: RelearnView,
  },
  "POST /api/cases/{id}/correction": {
    summary: "Replaces somebody else's verdict, with a reason; the first verdict stays on record",
    may: "case.correct",
    input: CorrectionInput,
    output: RelearnView,
  },
} as const satisfies EndpointTable;
