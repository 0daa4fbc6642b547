import "server-only";
import { RateLimiterMemory, RateLimiterRes } from "rate-limiter-flexible";
import type { Actor } from "./context";
import { KnownError } from "./errors";

/** Requests a minute for one person or key and process; far above what work by hand or a steady feed needs. */
const REQUESTS_PER_MINUTE = Number(process.env.CUPEL_REQUESTS_PER_MINUTE ?? 6_000);

const budget = new RateLimiterMemory({ points: REQUESTS_PER_MINUTE, duration: 60 });

/**
 * Sign-ins a minute from one address; each costs a slow hash and a trail entry. The address is the last one of
 * X-Forwarded-For, the one that the proxy nearest to us has seen.
 */
const SIGN_INS_PER_MINUTE = Number(process.env.CUPEL_SIGN_INS_PER_MINUTE ?? 120);

const signInBudget = new RateLimiterMemory({ points: SIGN_INS_PER_MINUTE, duration: 60 });

/** @throws KnownError too_many with Retry-After */
export async function spendFromBudget(actor: Actor): Promise<void> {
  const name =
    actor.kind === "person" ? (actor.key?.id ?? actor.personId) : actor.kind === "key" ? actor.id : null;
  if (name !== null) await consume(budget, name);
}

/** @throws KnownError too_many with Retry-After */
export async function spendSignInBudget(address: string): Promise<void> {
  await consume(signInBudget, address);
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
