import "server-only";
import { type Job, slotOfMinutes } from "../job";
import { mailSettings } from "../mail/settings";
import { askForApproval } from "./ask-for-approval";
import { applyPolicyInForce } from "./take-effect";

export const policyJobs: readonly Job[] = [
  {
    // A version approved for a later moment takes effect when that has come.
    name: "policy.takes-effect",
    everyMs: 60_000,
    slot: slotOfMinutes(1),
    run: applyPolicyInForce,
  },
  {
    name: "policy.approval-mail",
    everyMs: 60_000,
    slot: slotOfMinutes(1),
    run: (ctx) => askForApproval(ctx, { appUrl: mailSettings().appUrl }),
  },
];
