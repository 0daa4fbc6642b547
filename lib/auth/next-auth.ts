import "server-only";
import { createHmac } from "node:crypto";
import type { AuthOptions } from "next-auth";
import type { JWT } from "next-auth/jwt";
import Credentials from "next-auth/providers/credentials";
import { sharedDatabase } from "@/db/client";
import { callerAddress } from "../caller-address";
import type { Context } from "../context";
import { environment } from "../env";
import { KnownError } from "../errors";
import { log } from "../log";
import { newId } from "../new-id";
import { spendSignInBudget } from "../rate-limit";
import { findPersonForSession } from "./read";
import { SignInInput } from "./schema";
import { IDLE_SECONDS, isOverLongest, LONGEST_SECONDS, SessionClaims, sessionCookie } from "./session";
import { signIn } from "./sign-in";
import { signOut } from "./sign-out";

/**
 * Token sessions: the cookie runs out after fifteen idle minutes and is renewed by GET /api/auth/session, which the
 * page calls when the person touches it (other requests, such as live updates, renew nothing).
 */
export function authOptions(): AuthOptions {
  const { AUTH_SECRET, APP_URL } = environment();
  const { name, secure } = sessionCookie(APP_URL);
  const options = { httpOnly: true, sameSite: "lax" as const, path: "/", secure };
  const prefix = secure ? "__Host-" : "";
  return {
    secret: AUTH_SECRET,
    useSecureCookies: secure,
    session: { strategy: "jwt", maxAge: IDLE_SECONDS },
    jwt: { maxAge: IDLE_SECONDS },
    pages: { signIn: "/sign-in", signOut: "/", error: "/sign-in" },
    cookies: {
      sessionToken: { name, options },
      csrfToken: { name: `${prefix}cupel.csrf`, options },
      callbackUrl: { name: `${prefix}cupel.after`, options },
    },
    providers: [
      Credentials({
        credentials: { email: {}, password: {}, newPassword: {} },
        authorize: (given, request) => authorize(given, request.headers ?? {}),
      }),
    ],
    callbacks: {
      jwt: ({ token, user, trigger }) => (trigger === "signIn" ? newToken(user) : renewedToken(token)),
      session: ({ session, token }) => {
        const claims = SessionClaims.parse(token);
        const end = Math.min(Date.parse(session.expires), (claims.signedInAt + LONGEST_SECONDS) * 1000);
        return { expires: new Date(end).toISOString(), user: {} };
      },
    },
    events: {
      signOut: async ({ token }) => {
        const claims = SessionClaims.safeParse(token);
        if (claims.success) await signOut(strangersContext(), claims.data);
      },
    },
    logger: {
      // A token that ran out or was forged is everyday; next-auth reports it as an error.
      error: (code, metadata) => {
        const err = metadata instanceof Error ? metadata : metadata.error;
        if (code !== "JWT_SESSION_ERROR") log.error({ code, err }, "Signing in or out failed");
      },
      warn: (code) => log.warn({ code }),
      debug: () => {},
    },
  };
}

async function authorize(given: Record<string, unknown> | undefined, headers: Record<string, unknown>) {
  const { email, password, newPassword } = given ?? {};
  const input = SignInInput.safeParse({ email, password, ...(newPassword ? { newPassword } : {}) });
  if (!input.success) throw new Error("refused");
  const { CUPEL_TRUSTED_PROXIES } = environment();
  const address = callerAddress(String(headers["x-forwarded-for"] ?? ""), CUPEL_TRUSTED_PROXIES);
  try {
    await spendSignInBudget(address);
  } catch (error) {
    throw error instanceof KnownError ? new Error("too_many") : error;
  }
  const result = await signIn(strangersContext(), input.data, originReference(address)).catch(
    (error: unknown) => {
      log.error({ err: error }, "A sign-in failed");
      throw new Error("failed");
    },
  );
  if (!result.signedIn) throw new Error([result.refusal, result.detail].filter(Boolean).join(":"));
  return { id: result.personId, sessionVersion: result.sessionVersion };
}

function newToken(user: object): SessionClaims {
  const { id, sessionVersion } = user as { id: string; sessionVersion: number };
  return SessionClaims.parse({
    sub: id,
    sid: newId(),
    sessionVersion,
    signedInAt: Math.floor(Date.now() / 1000),
  });
}

async function renewedToken(token: JWT): Promise<SessionClaims> {
  const claims = SessionClaims.parse(token);
  const { db, now } = strangersContext();
  if (isOverLongest(claims, now()) || !(await findPersonForSession(db, claims))) {
    throw new Error("This session has ended");
  }
  return claims;
}

function strangersContext(): Context {
  const db = sharedDatabase(environment().DATABASE_URL);
  return { actor: { kind: "anonymous" }, db, now: () => new Date(), requestId: newId(), idempotency: null };
}

/** Tells attempts of one origin from another's in the trail without keeping the address, which is personal data. */
function originReference(address: string): string {
  return createHmac("sha256", environment().AUTH_SECRET).update(address).digest("hex").slice(0, 16);
}
