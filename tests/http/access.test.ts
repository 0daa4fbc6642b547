import { readdirSync } from "node:fs";
import path from "node:path";
import { afterAll, beforeAll, describe, expect, inject, test } from "vitest";
import { createDatabase } from "@/db/client";
import { CAPABILITIES, keyMay, rolesMay } from "@/lib/auth/access";
import { ROLES, type Role, SCOPES, type Scope } from "@/lib/auth/codes";
import { PAGES } from "@/lib/auth/pages";
import type { Endpoint } from "@/lib/endpoint";
import { ENDPOINTS } from "@/lib/endpoints";
import { addKey } from "@/lib/keys/add";
import { newId } from "@/lib/new-id";
import { contextOf, makePerson, TEST_PASSWORD } from "../support/people";
import { CookieJar, signedIn, visit } from "../support/session";

const { url } = inject("app");
const { db, close } = createDatabase(inject("mariadb").url);
afterAll(close);

const jars = new Map<Role, CookieJar>();
/** One key for each scope; those that act for somebody act for a person who may. */
const keys = new Map<Scope, { secret: string; roles: readonly Role[] }>();

beforeAll(async () => {
  for (const role of ROLES) {
    const { email } = await makePerson(db, [role]);
    jars.set(role, await signedIn(url, email, TEST_PASSWORD));
  }
  const ctx = contextOf(db, await makePerson(db, ["administrator"]));
  for (const scope of SCOPES) {
    const roles: Role[] = scope === "cases:decide" || scope === "policy:write" ? ["supervisor"] : [];
    const actsForPersonId = roles.length > 0 ? (await makePerson(db, roles)).personId : undefined;
    const input = { name: `walk ${newId()}`, source: "walk", scopes: [scope] };
    const { secret } = await addKey(ctx, actsForPersonId ? { ...input, actsForPersonId } : input);
    keys.set(scope, { secret: secret ?? "", roles });
  }
});

const endpoints: [string, Endpoint][] = Object.entries(ENDPOINTS);
const filled = (pattern: string) => pattern.replace(/\{\w+\}|\[\w+\]/g, newId());

/** Calls a route with next to nothing: whoever may not is refused before the input is looked at. */
async function call(
  key: string,
  send: (path: string, init: RequestInit) => Promise<Response>,
): Promise<number> {
  const [method = "", pattern = ""] = key.split(" ");
  const stop = new AbortController();
  const init: RequestInit = { method, signal: stop.signal };
  if (method !== "GET") Object.assign(init, { body: "{}", headers: { "Content-Type": "application/json" } });
  const response = await send(filled(pattern), init);
  stop.abort();
  return response.status;
}

/** Let in; that the input is next to nothing, or the thing not there, may still be said. */
function expectAdmitted(status: number): void {
  expect([401, 403]).not.toContain(status);
  expect(status).toBeLessThan(500);
}

describe.each(endpoints)("%s", (key, { may }) => {
  test(may === "anyone" ? "answers strangers" : "sends strangers away", async () => {
    const status = await call(key, (to, init) => visit(url, to, new CookieJar(), init));
    if (may === "anyone") expectAdmitted(status);
    else expect(status).toBe(401);
  });

  test.each(ROLES)("answers as the matrix says for a %s", async (role) => {
    const jar = jars.get(role)?.copy() ?? new CookieJar();
    const status = await call(key, (to, init) => visit(url, to, jar, init));
    if (may === "anyone" || rolesMay([role], may)) expectAdmitted(status);
    else expect(status).toBe(403);
  });

  test.each(SCOPES)("answers as the matrix says for a key with %s", async (scope) => {
    const given = keys.get(scope);
    const status = await call(key, (to, init) =>
      fetch(new URL(to, url), {
        ...init,
        headers: { ...init.headers, Authorization: `Bearer ${given?.secret}` },
      }),
    );
    if (may === "anyone" || keyMay([scope], given?.roles.length ? given.roles : null, may))
      expectAdmitted(status);
    else expect(status).toBe(403);
  });
});

/** From the folder, not from a list: a page that nobody listed is walked as well. */
const pages = readdirSync(path.resolve(import.meta.dirname, "../../app"), {
  recursive: true,
  encoding: "utf8",
})
  .filter((name) => /(^|\/)page\.tsx$/.test(name))
  .map((name) => `/${name.replace(/\/?page\.tsx$/, "")}`);

describe.each(pages)("page %s", (pattern) => {
  const page = Object.entries(PAGES).find(([listed]) => listed === pattern)?.[1];

  test("is listed with the capability it takes", () => {
    expect(page).toBeDefined();
  });

  // The start page is anybody's once they are somebody.
  const isOpen = page?.may === "anyone" && pattern !== "/";

  test(isOpen ? "is open to strangers" : "sends strangers to the sign-in page", async () => {
    const asked = filled(pattern);
    const response = await visit(url, asked, new CookieJar());
    if (isOpen) {
      expect(response.status).toBe(200);
      return;
    }
    expect(response.status).toBe(307);
    const onward = new URL(response.headers.get("Location") ?? "", url);
    expect(onward.pathname + onward.search).toBe(`/sign-in?from=${encodeURIComponent(asked)}`);
  });

  test.each(ROLES)("answers as the matrix says for a %s", async (role) => {
    const { status } = await visit(url, filled(pattern), jars.get(role)?.copy() ?? new CookieJar());
    if (!page || page.may === "anyone" || rolesMay([role], page.may)) {
      // Not found is an answer too: the walk asks for things that are not there.
      expect([200, 307, 404]).toContain(status);
    } else {
      expect(status).toBe(403);
    }
  });
});

test("every capability is asked for by some route or page", () => {
  const asked = new Set([
    ...endpoints.map(([, { may }]) => may),
    ...Object.values(PAGES).map(({ may }) => may),
  ]);
  expect(Object.keys(CAPABILITIES).filter((capability) => !asked.has(capability as never))).toEqual([]);
});
