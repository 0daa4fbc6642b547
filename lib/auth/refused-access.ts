import "server-only";
import { RateLimiterMemory, RateLimiterRes } from "rate-limiter-flexible";
import { inTransaction } from "@/db/tx";
import type { Context } from "../context";
import { KnownError } from "../errors";
import { log } from "../log";
import { appendTrail } from "../trail/append";
import type { Capability } from "./access";

/** Who was refused where is told once an hour and process, so that a script cannot flood the trail. */
const told = new RateLimiterMemory({ points: 1, duration: 3_600 });

/** A route or page by its pattern, never as it was asked for, and the capability that it takes. */
export type Asked = { route: string; may: Capability | "anyone" };

export const isForbidden = (error: unknown): boolean =>
  error instanceof KnownError && error.code === "forbidden";

/** Writes into the trail that a signed-in person or a key was refused. Their answer does not depend on it. */
export async function recordRefusedAccess(ctx: Context, { route, may }: Asked): Promise<void> {
  const who = identityOf(ctx);
  if (who === null) return;
  const once = `${who} ${route}`;
  try {
    await told.consume(once);
  } catch (refused) {
    if (refused instanceof RateLimiterRes) return;
    throw refused;
  }
  const entry = {
    act: "access.refused",
    subjectKind: "route",
    subjectId: route.slice(0, 64),
    facts: { route, capability: may },
  };
  try {
    await inTransaction(ctx.db, (tx) => appendTrail(ctx, tx, entry));
  } catch (error) {
    await told.delete(once);
    log.error({ requestId: ctx.requestId, err: error }, "A refused access is not in the trail");
  }
}

function identityOf({ actor }: Context): string | null {
  if (actor.kind === "person") return actor.key?.id ?? actor.personId;
  return actor.kind === "key" ? actor.id : null;
}
