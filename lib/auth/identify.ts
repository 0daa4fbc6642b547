import "server-only";
import { eq } from "drizzle-orm";
import { NextRequest } from "next/server";
import { getToken } from "next-auth/jwt";
import type { Database } from "@/db/client";
import { apiKeys } from "@/db/schema/people";
import type { Actor, PersonActor } from "../context";
import { environment } from "../env";
import { unauthenticated } from "../errors";
import { hashOfKey } from "./key-hash";
import { findKey, findPersonForSession } from "./read";
import { isOverLongest, SessionClaims, sessionCookie } from "./session";

/** Whose request it is: a key in the Authorization header, else the session cookie. @throws KnownError unauthenticated */
export async function identify(url: string, headers: Headers, db: Database, now: Date): Promise<Actor> {
  const authorization = headers.get("Authorization");
  return authorization === null
    ? identifySession(url, headers, db, now)
    : identifyKey(authorization, db, now);
}

export async function identifySession(
  url: string,
  headers: Headers,
  db: Database,
  now: Date,
): Promise<PersonActor> {
  const { AUTH_SECRET, APP_URL } = environment();
  const cookie = sessionCookie(APP_URL);
  const token = await getToken({
    req: new NextRequest(url, { headers }),
    secret: AUTH_SECRET,
    cookieName: cookie.name,
    secureCookie: cookie.secure,
  });
  const claims = SessionClaims.safeParse(token);
  if (!claims.success || isOverLongest(claims.data, now)) throw ended();
  const person = await findPersonForSession(db, claims.data);
  if (!person) throw ended();
  return { kind: "person", ...person, key: null };
}

const ended = () => unauthenticated("Your session has ended; sign in again");

async function identifyKey(header: string, db: Database, now: Date): Promise<Actor> {
  const key = /^Bearer +([\x21-\x7e]+)$/i.exec(header)?.[1];
  if (!key) throw unauthenticated("Send the key as Authorization: Bearer <key>");
  const found = await findKey(db, hashOfKey(key));
  if (!found) throw unauthenticated("This key is not known or has been revoked");
  const { row, person } = found;
  // To the minute: a feed of thousands of requests should not write a row for each.
  if (!row.lastUsedAt || now.getTime() - row.lastUsedAt.getTime() > 60_000) {
    await db.update(apiKeys).set({ lastUsedAt: now }).where(eq(apiKeys.id, row.id));
  }
  const { id, source, scopes } = row;
  if (!row.actsForPersonId) return { kind: "key", id, source, scopes };
  if (!person) throw unauthenticated("The person this key acts for is no longer active");
  return { kind: "person", ...person, key: { id, source, scopes } };
}
