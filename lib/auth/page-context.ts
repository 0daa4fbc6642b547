import "server-only";
import { headers } from "next/headers";
import { notFound, redirect, forbidden as renderForbidden } from "next/navigation";
import { cache } from "react";
import { sharedDatabase } from "@/db/client";
import type { Context, PersonActor } from "../context";
import { environment } from "../env";
import { KnownError } from "../errors";
import { newId } from "../new-id";
import { ASKED_PATH_HEADER } from "./asked-path";
import { mayDo } from "./demand";
import { identifySession } from "./identify";
import { PAGES, type PagePath } from "./pages";
import { isForbidden, recordRefusedAccess } from "./refused-access";

export type PageContext = Context & { actor: PersonActor };

/** First line of every page: sends strangers to the sign-in page and refuses roles the matrix does not list. */
export async function pageContext(path: PagePath): Promise<PageContext> {
  const page = PAGES[path];
  const ctx = await signedInContext();
  if (!ctx) redirect(`/sign-in?from=${encodeURIComponent(await askedFor(path))}`);
  if (page.may !== "anyone" && !mayDo(ctx.actor, page.may)) await refuse(ctx, path);
  return ctx;
}

/** The address as asked for, which proxy.ts passes along: a link from a mail leads on after signing in. */
async function askedFor(path: PagePath): Promise<string> {
  const asked = (await headers()).get(ASKED_PATH_HEADER);
  return asked ?? (path.includes("[") ? "/" : path);
}

/** For pages open to everybody, and the shell; asked once a request. */
export const signedInContext = cache(async (): Promise<PageContext | null> => {
  const db = sharedDatabase(environment().DATABASE_URL);
  try {
    const now = () => new Date();
    const actor = await identifySession(environment().APP_URL, new Headers(await headers()), db, now());
    return { actor, db, now, requestId: newId(), idempotency: null };
  } catch (error) {
    if (error instanceof KnownError && error.code === "unauthenticated") return null;
    throw error;
  }
});

/** What a page reads: a refusal of the read becomes the page's 404 or 403. */
export async function forPage<T>(ctx: PageContext, path: PagePath, reading: Promise<T>): Promise<T> {
  try {
    return await reading;
  } catch (error) {
    if (error instanceof KnownError && error.code === "not_found") notFound();
    if (isForbidden(error)) return refuse(ctx, path);
    throw error;
  }
}

async function refuse(ctx: PageContext, path: PagePath): Promise<never> {
  await recordRefusedAccess(ctx, { route: path, may: PAGES[path].may });
  renderForbidden();
}
