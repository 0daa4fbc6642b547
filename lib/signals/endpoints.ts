import { ApprovalView } from "../approvals/schema";
import type { EndpointTable } from "../endpoint";
import {
  ArchiveSignalInput,
  ChangeSignalInput,
  DraftSignalInput,
  OwnSignalView,
  SignalPreview,
  SignalPreviewInput,
  SignalsInput,
  SignalsView,
  SwitchSignalInput,
} from "./own-schema";

export const signalEndpoints = {
  "GET /api/signals": {
    summary: "The catalogue of signals and the team's own, with the weights of the scorer in use",
    may: "scorer.read",
    input: SignalsInput,
    output: SignalsView,
  },
  "GET /api/signals/preview": {
    summary: "Checks a formula, and shows what it measures on the newest payments",
    may: "scorer.manage",
    input: SignalPreviewInput,
    output: SignalPreview,
  },
  "POST /api/signals": {
    summary: "Defines a signal of the team's own, as a draft",
    may: "scorer.manage",
    input: DraftSignalInput,
    output: OwnSignalView,
    status: 201,
  },
  "PUT /api/signals/{id}": {
    summary: "Changes a draft",
    may: "scorer.manage",
    input: ChangeSignalInput,
    output: OwnSignalView,
  },
  "POST /api/signals/{id}/archive": {
    summary: "Puts a draft, or a signal that is off, away",
    may: "scorer.manage",
    input: ArchiveSignalInput,
    output: null,
    status: 204,
  },
  "POST /api/signals/{id}/switch": {
    summary: "Proposes to switch a signal on or off; a second person approves it and the label log is re-run",
    may: "scorer.manage",
    input: SwitchSignalInput,
    output: ApprovalView,
    status: 201,
  },
} as const satisfies EndpointTable;
