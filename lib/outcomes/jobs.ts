import "server-only";
import { type Job, slotOfMinutes } from "../job";
import { applyMissedOutcomes } from "./apply-missed";

export const outcomeJobs: readonly Job[] = [
  { name: "outcomes.apply-missed", everyMs: 60_000, slot: slotOfMinutes(1), run: applyMissedOutcomes },
];
