import "server-only";
import { type Job, slotOfMinutes } from "../job";
import { applyPolicyInForce } from "./take-effect";

export const policyJobs: readonly Job[] = [
  {
    // A version approved for a later moment takes effect when that has come.
    name: "policy.takes-effect",
    everyMs: 60_000,
    slot: slotOfMinutes(1),
    run: applyPolicyInForce,
  },
];
