import "server-only";
import { RateLimiterMemory, RateLimiterRes } from "rate-limiter-flexible";
import type { Actor } from "./context";
import { environment } from "./env";
import { KnownError } from "./errors";

/** Made with the first request, since the settings are read when the server runs and not when it is built. */
const budgetOf = (setting: "CUPEL_REQUESTS_PER_MINUTE" | "CUPEL_SIGN_INS_PER_MINUTE") => {
  let budget: RateLimiterMemory | undefined;
  return () => {
    budget ??= new RateLimiterMemory({ points: environment()[setting], duration: 60 });
    return budget;
  };
};
const requestBudget = budgetOf("CUPEL_REQUESTS_PER_MINUTE");
const signInBudget = budgetOf("CUPEL_SIGN_INS_PER_MINUTE");

/** @throws KnownError too_many with Retry-After */
export async function spendFromBudget(actor: Actor): Promise<void> {
  const name =
    actor.kind === "person" ? (actor.key?.id ?? actor.personId) : actor.kind === "key" ? actor.id : null;
  if (name !== null) await consume(requestBudget(), name);
}

/** @throws KnownError too_many with Retry-After */
export async function spendSignInBudget(address: string): Promise<void> {
  await consume(signInBudget(), address);
}

async function consume(limiter: RateLimiterMemory, name: string): Promise<void> {
  try {
    await limiter.consume(name);
  } catch (refused) {
    if (!(refused instanceof RateLimiterRes)) throw refused;
    throw new KnownError("too_many", "Too many requests; wait and send again", {
      headers: { "Retry-After": String(Math.max(1, Math.ceil(refused.msBeforeNext / 1000))) },
    });
  }
}
