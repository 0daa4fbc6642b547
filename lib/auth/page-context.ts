import "server-only";
import { headers } from "next/headers";
import { forbidden as renderForbidden, redirect } from "next/navigation";
import { sharedDatabase } from "@/db/client";
import type { Context, PersonActor } from "../context";
import { environment } from "../env";
import { KnownError } from "../errors";
import { newId } from "../new-id";
import { mayDo } from "./demand";
import { identifySession } from "./identify";
import { PAGES, type PagePath } from "./pages";

export type PageContext = Context & { actor: PersonActor };

/** First line of every page: sends strangers to the sign-in page and refuses roles the matrix does not list. */
export async function pageContext(path: PagePath): Promise<PageContext> {
  const page = PAGES[path];
  const ctx = await signedInContext();
  if (!ctx) redirect(`/sign-in?from=${encodeURIComponent(path.includes("[") ? "/" : path)}`);
  if (page.may !== "anyone" && !mayDo(ctx.actor, page.may)) renderForbidden();
  return ctx;
}

/** For pages open to everybody, and the shell. */
export async function signedInContext(): Promise<PageContext | null> {
  const db = sharedDatabase(environment().DATABASE_URL);
  try {
    const actor = await identifySession(environment().APP_URL, new Headers(await headers()), db);
    return { actor, db, now: () => new Date(), requestId: newId(), idempotency: null };
  } catch (error) {
    if (error instanceof KnownError && error.code === "unauthenticated") return null;
    throw error;
  }
}
