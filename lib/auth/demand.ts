import "server-only";
import type { Actor, Context, PersonActor } from "../context";
import { forbidden } from "../errors";
import { type Capability, keyMay, rolesMay } from "./access";

export function mayDo(actor: Actor, capability: Capability): boolean {
  if (actor.kind === "system") return true;
  if (actor.kind === "anonymous") return false;
  if (actor.kind === "key") return keyMay(actor.scopes, null, capability);
  return actor.key ? keyMay(actor.key.scopes, actor.roles, capability) : rolesMay(actor.roles, capability);
}

/** @throws KnownError forbidden */
export function demand(ctx: Context, capability: Capability): void {
  if (!mayDo(ctx.actor, capability)) throw forbidden();
}

/** For acts that only a person can do, directly or through a key that acts for them. */
export function demandPerson(ctx: Context, capability: Capability): PersonActor {
  if (ctx.actor.kind !== "person") throw forbidden("Only a person, or a key that acts for one, may do this");
  demand(ctx, capability);
  return ctx.actor;
}
