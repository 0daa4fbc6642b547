import { afterAll, describe, expect, inject, test } from "vitest";
import { createDatabase } from "@/db/client";
import { makePerson, TEST_PASSWORD } from "../support/people";
import { CookieJar, signedIn, visit } from "../support/session";

const { url } = inject("app");
const { db, close } = createDatabase(inject("mariadb").url);
afterAll(close);

const nonceOf = (response: Response) =>
  /script-src 'self' 'nonce-([^']+)'/.exec(response.headers.get("Content-Security-Policy") ?? "")?.[1];

describe("every page", () => {
  test.each(["/sign-in", "/profile", "/no/such/page"])(
    "%s gives each of its scripts the nonce of its policy",
    async (path) => {
      const { email } = await makePerson(db, ["reviewer"]);
      const jar = path === "/sign-in" ? new CookieJar() : await signedIn(url, email, TEST_PASSWORD);
      const first = await visit(url, path, jar);
      const second = await visit(url, path, jar);
      const nonce = nonceOf(first);
      expect(nonce).toMatch(/^[A-Za-z0-9+/]{22}==$/);
      expect(nonceOf(second)).not.toBe(nonce);
      const scripts = (await first.text()).match(/<script\b[^>]*>/g) ?? [];
      expect(scripts.length).toBeGreaterThan(0);
      expect(scripts.filter((script) => !script.includes(`nonce="${nonce}"`))).toEqual([]);
    },
  );

  test("may be framed by nobody, sniffed by nobody, and keeps its address to itself", async () => {
    const { headers } = await visit(url, "/sign-in", new CookieJar());
    expect(headers.get("Content-Security-Policy")).toContain("frame-ancestors 'none'");
    expect(headers.get("X-Content-Type-Options")).toBe("nosniff");
    expect(headers.get("Referrer-Policy")).toBe("same-origin");
    expect(headers.get("Permissions-Policy")).toContain("camera=()");
    expect(headers.get("Cross-Origin-Opener-Policy")).toBe("same-origin");
    expect(headers.get("X-Powered-By")).toBeNull();
    // Served over plain HTTP here: a promise of HTTPS would lock people out.
    expect(headers.get("Strict-Transport-Security")).toBeNull();
  });

  test.each(["/icon.svg", "/favicon.ico"])("has its icon, at %s too", async (path) => {
    const response = await fetch(new URL(path, url));
    expect([response.status, response.headers.get("Content-Type")]).toEqual([200, "image/svg+xml"]);
  });

  test("cannot be asked to believe where a stranger came from", async () => {
    const response = await fetch(new URL("/people", url), {
      redirect: "manual",
      headers: { "x-cupel-asked-path": "https://evil.example/", "x-nonce": "mine" },
    });
    expect(response.headers.get("Location")).toMatch(/\/sign-in\?from=%2Fpeople$/);
    expect(nonceOf(response)).not.toBe("mine");
  });
});

describe("every answer of the API", () => {
  test.each(["/api/health/live", "/api/profile", "/api/openapi.json"])(
    "%s is kept nowhere and runs nothing",
    async (path) => {
      const { headers } = await fetch(new URL(path, url));
      expect(headers.get("Cache-Control")).toBe("no-store");
      expect(headers.get("Content-Security-Policy")).toBe("default-src 'none'; frame-ancestors 'none'");
      expect(headers.get("X-Content-Type-Options")).toBe("nosniff");
      expect(headers.get("X-Request-Id")).toMatch(/^[0-9a-f-]{36}$/);
    },
  );

  test("refuses with a problem of RFC 9457 that shows nothing of the inside", async () => {
    const response = await fetch(new URL("/api/profile", url));
    expect(response.status).toBe(401);
    expect(response.headers.get("Content-Type")).toBe("application/problem+json");
    expect(await response.json()).toMatchObject({
      status: 401,
      title: "Unauthorized",
      code: "unauthenticated",
    });
  });
});
