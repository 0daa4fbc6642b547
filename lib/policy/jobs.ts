import "server-only";
import { applyPolicyInForce } from "./take-effect";

const MINUTE_MS = 60_000;

/** Every minute: a version approved for a later moment takes effect when it has come. */
export const policyTakesEffect = {
  name: "policy.takes-effect",
  everyMs: MINUTE_MS,
  slot: (now: Date) => new Date(Math.floor(now.getTime() / MINUTE_MS) * MINUTE_MS).toISOString(),
  run: applyPolicyInForce,
};
