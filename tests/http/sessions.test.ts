import { eq } from "drizzle-orm";
import { afterAll, describe, expect, inject, test } from "vitest";
import { createDatabase } from "@/db/client";
import { people } from "@/db/schema/people";
import { setRoles } from "@/lib/people/set-roles";
import { deactivatePerson } from "@/lib/people/set-state";
import { contextOf, makePerson, TEST_PASSWORD } from "../support/people";
import { CookieJar, sendSignIn, signedIn, visit } from "../support/session";

const { url } = inject("app");
const { db, close } = createDatabase(inject("mariadb").url);
afterAll(close);

const profile = (jar: CookieJar) => visit(url, "/api/profile", jar);

describe("a session", () => {
  test("is a cookie that scripts cannot read and other sites do not send, for fifteen minutes", async () => {
    const { email } = await makePerson(db, ["reviewer"]);
    const jar = new CookieJar();
    const response = await sendSignIn(url, jar, { email, password: TEST_PASSWORD });
    const line = response.headers.getSetCookie().find((each) => each.startsWith("cupel.session="));
    expect(line).toMatch(/; HttpOnly/);
    expect(line).toMatch(/; SameSite=Lax/);
    expect(line).toMatch(/; Path=\//);
    expect(line).not.toMatch(/Domain=/);
    const expires = Date.parse(/Expires=([^;]+)/.exec(line ?? "")?.[1] ?? "");
    const sent = Date.parse(response.headers.get("Date") ?? "");
    expect(Math.abs(expires - sent - 15 * 60_000)).toBeLessThan(5_000);
    expect((await profile(jar)).status).toBe(200);
  });

  test("is renewed by asking for it and by nothing else", async () => {
    const { email } = await makePerson(db, ["reviewer"]);
    const jar = await signedIn(url, email, TEST_PASSWORD);
    expect((await profile(jar)).headers.getSetCookie()).toEqual([]);
    expect((await visit(url, "/profile", jar)).headers.getSetCookie()).toEqual([]);
    const renewal = await visit(url, "/api/auth/session", jar);
    expect(renewal.headers.getSetCookie().some((line) => line.startsWith("cupel.session="))).toBe(true);
    expect(Object.keys((await renewal.json()) as object).sort()).toEqual(["expires", "user"]);
    expect((await profile(jar)).status).toBe(200);
  });

  test("says nothing about the person to whoever holds the cookie", async () => {
    const { email, personId } = await makePerson(db, ["reviewer"]);
    const jar = await signedIn(url, email, TEST_PASSWORD);
    expect(jar.header).not.toContain(personId);
    const token = /cupel\.session=([^;]+)/.exec(jar.header)?.[1] ?? "";
    const header = JSON.parse(Buffer.from(token.split(".")[0] ?? "", "base64url").toString()) as object;
    expect(header).toEqual({ alg: "dir", enc: "A256GCM" });
  });

  test("is over once it was signed out of, for every copy of its cookie, and other sessions go on", async () => {
    const { email } = await makePerson(db, ["reviewer"]);
    const jar = await signedIn(url, email, TEST_PASSWORD);
    const copy = jar.copy();
    const other = await signedIn(url, email, TEST_PASSWORD);
    const { csrfToken } = (await (await visit(url, "/api/auth/csrf", jar)).json()) as { csrfToken: string };
    await visit(url, "/api/auth/signout", jar, {
      method: "POST",
      body: new URLSearchParams({ csrfToken, json: "true" }),
    });
    expect(jar.header).not.toContain("cupel.session");
    expect((await profile(copy)).status).toBe(401);
    expect(await (await visit(url, "/api/auth/session", copy)).json()).toEqual({});
    expect((await profile(other)).status).toBe(200);
  });

  test("ends with the next request when roles change, and the account's closing keeps it out", async () => {
    const person = await makePerson(db, ["reviewer"]);
    const administrator = contextOf(db, await makePerson(db, ["administrator"]));
    const jar = await signedIn(url, person.email, TEST_PASSWORD);
    await setRoles(administrator, { id: person.personId, roles: ["supervisor"] });
    expect((await profile(jar)).status).toBe(401);
    expect(await (await visit(url, "/api/auth/session", jar)).json()).toEqual({});

    const again = await signedIn(url, person.email, TEST_PASSWORD);
    expect(await (await profile(again)).json()).toMatchObject({ roles: ["supervisor"] });
    await deactivatePerson(administrator, { id: person.personId });
    expect((await profile(again)).status).toBe(401);
    const refused = await sendSignIn(url, new CookieJar(), { email: person.email, password: TEST_PASSWORD });
    expect(refused.status).toBe(401);
  });

  test("forged, foreign and broken cookies are no session", async () => {
    for (const value of ["", "x", "eyJhbGciOiJub25lIn0.e30.", `${"A".repeat(40)}.${"B".repeat(40)}`]) {
      const response = await fetch(new URL("/api/profile", url), {
        headers: { Cookie: `cupel.session=${value}` },
      });
      expect(response.status).toBe(401);
    }
  });
});

describe("signing in", () => {
  test("answers wrong passwords and unknown addresses alike", async () => {
    const { email } = await makePerson(db, ["reviewer"]);
    const wrong = await sendSignIn(url, new CookieJar(), { email, password: "not this one at all" });
    const unknown = await sendSignIn(url, new CookieJar(), {
      email: "x@cupel.test",
      password: TEST_PASSWORD,
    });
    expect([wrong.status, await wrong.text()]).toEqual([unknown.status, await unknown.text()]);
    expect(wrong.status).toBe(401);
    expect(wrong.headers.getSetCookie().join()).not.toContain("cupel.session");
  });

  test("needs the token of the form, so that no other site can sign somebody in", async () => {
    const { email } = await makePerson(db, ["reviewer"]);
    const jar = new CookieJar();
    await visit(url, "/api/auth/csrf", jar);
    const response = await visit(url, "/api/auth/callback/credentials", jar, {
      method: "POST",
      body: new URLSearchParams({ email, password: TEST_PASSWORD, csrfToken: "0".repeat(64), json: "true" }),
    });
    expect(response.headers.getSetCookie().join()).not.toContain("cupel.session");
    expect((await profile(jar)).status).toBe(401);
  });

  test("leads on to no other site", async () => {
    const { email } = await makePerson(db, ["reviewer"]);
    const response = await sendSignIn(url, new CookieJar(), {
      email,
      password: TEST_PASSWORD,
      callbackUrl: "https://evil.example/",
    });
    const answer = (await response.json()) as { url: string };
    expect([response.status, new URL(answer.url).origin]).toEqual([200, new URL(url).origin]);
  });

  test("with a one-time password leads to no session before the person chose their own", async () => {
    const { email, personId } = await makePerson(db, ["reviewer"], { passwordIsOneTime: 1 });
    const jar = new CookieJar();
    const first = await sendSignIn(url, jar, { email, password: TEST_PASSWORD });
    expect(await first.text()).toContain("new_password_needed");
    expect((await profile(jar)).status).toBe(401);
    const newPassword = "eleven brass weights";
    const second = await sendSignIn(url, jar, { email, password: TEST_PASSWORD, newPassword });
    expect(second.status).toBe(200);
    expect((await profile(jar)).status).toBe(200);
    const [row] = await db.select().from(people).where(eq(people.id, personId));
    expect(row?.passwordIsOneTime).toBe(0);
  });
});

describe("a write", () => {
  const write = (jar: CookieJar, headers: Record<string, string>) =>
    fetch(new URL("/api/profile/time-zone", url), {
      method: "PUT",
      body: JSON.stringify({ timeZone: "UTC" }),
      headers: { "Content-Type": "application/json", Cookie: jar.header, ...headers },
    });

  test("comes from our own pages", async () => {
    const { email } = await makePerson(db, ["reviewer"]);
    const jar = await signedIn(url, email, TEST_PASSWORD);
    const { origin } = new URL(url);
    expect((await write(jar, { Origin: origin })).status).toBe(200);
    expect((await write(jar, { "Sec-Fetch-Site": "same-origin" })).status).toBe(200);
    expect((await write(jar, { Origin: "https://evil.example" })).status).toBe(403);
    expect((await write(jar, { "Sec-Fetch-Site": "cross-site", Origin: origin })).status).toBe(403);
    expect((await write(jar, { "Sec-Fetch-Site": "same-site", Origin: origin })).status).toBe(403);
    expect((await write(jar, {})).status).toBe(403);
  });
});
