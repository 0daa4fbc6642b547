import type { Database } from "@/db/client";
import type { Role, Scope } from "./auth/codes";

export type PersonActor = {
  kind: "person";
  personId: string;
  name: string;
  roles: readonly Role[];
  timeZone: string;
  /** Set when a key acts for the person: the trail shows both, and the key's scopes limit the person's rights. */
  key: { id: string; source: string; scopes: readonly Scope[] } | null;
};
export type KeyActor = { kind: "key"; id: string; source: string; scopes: readonly Scope[] };
export type SystemActor = { kind: "system"; job: string };
/** A stranger at a door that is open to everybody; the access matrix gives it nothing. */
export type AnonymousActor = { kind: "anonymous" };
export type Actor = PersonActor | KeyActor | SystemActor | AnonymousActor;

/** Everything a use case may know about the outside. */
export type Context = {
  actor: Actor;
  db: Database;
  now: () => Date;
  requestId: string;
  idempotency: { key: string; requestHash: Buffer } | null;
};
