import { z } from "zod";
import type { EndpointTable } from "../endpoint";
import {
  AssignInput,
  CaseInput,
  CaseStateView,
  CaseView,
  ClaimInput,
  DraftInput,
  EscalateInput,
  NextInput,
  NoteInput,
  QueueInput,
  QueueView,
  ReleaseInput,
  RugView,
  WaitInput,
} from "./schema";

const Nothing = z.strictObject({});
const asked = <Input extends z.ZodObject>(summary: string, input: Input) => ({
  summary,
  may: "desk.work" as const,
  input,
  output: CaseStateView,
});

export const caseEndpoints = {
  "GET /api/queue": {
    summary: "Waiting cases in the policy's order",
    may: "cases.read",
    input: QueueInput,
    output: QueueView,
  },
  "GET /api/queue/rug": {
    summary: "Evidence of every waiting case, for the axis",
    may: "cases.read",
    input: Nothing,
    output: RugView,
  },
  "GET /api/queue/events": {
    summary: "Server-Sent Events: `queue` and `case`; the event id is the label log's sequence",
    may: "cases.read",
    input: Nothing,
    output: null,
    produces: "text/event-stream",
  },
  "POST /api/queue/next": {
    summary: "Claims the best case this person may take; 204 when there is none",
    may: "desk.work",
    input: NextInput,
    output: CaseView,
    also: [204],
  },
  "GET /api/cases/{id}": {
    summary: "All that the case page shows",
    may: "cases.read",
    input: CaseInput,
    output: CaseView,
  },
  "POST /api/cases/{id}/claim": asked("Claims a case, or renews the lease", ClaimInput),
  "POST /api/cases/{id}/release": asked("Gives a claim back", ReleaseInput),
  "POST /api/cases/{id}/escalate": asked("Hands the case to a supervisor", EscalateInput),
  "POST /api/cases/{id}/wait": asked("Sets the case aside until a time", WaitInput),
  "POST /api/cases/{id}/assign": {
    ...asked("Assigns the case to a person, or to nobody", AssignInput),
    may: "case.assign",
  },
  "POST /api/cases/{id}/notes": { ...asked("Adds a note", NoteInput) },
  "PUT /api/cases/{id}/draft": {
    summary: "Keeps a half-written note",
    may: "desk.work",
    input: DraftInput,
    output: null,
    status: 204,
  },
} as const satisfies EndpointTable;
