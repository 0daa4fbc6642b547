import { describe, expect, test } from "vitest";
import { CAPABILITIES, type Capability, PERSONAL_SCOPES, scopesFor } from "@/lib/auth/access";
import { localPath } from "@/lib/auth/asked-path";
import { ROLES, type Scope } from "@/lib/auth/codes";
import { contentSecurityPolicy } from "@/lib/auth/content-security";
import { demand, demandPerson, mayDo } from "@/lib/auth/demand";
import { isOverLongest, sessionCookie } from "@/lib/auth/session";
import type { Actor, PersonActor } from "@/lib/context";

const person = (roles: PersonActor["roles"], key: PersonActor["key"] = null): PersonActor => ({
  kind: "person",
  personId: "p",
  name: "P",
  roles,
  timeZone: "UTC",
  key,
});
const keyWith = (...scopes: Scope[]) => ({ id: "k", source: "s", scopes });
const capabilities = Object.keys(CAPABILITIES) as Capability[];

describe("who may do what", () => {
  test("a stranger may do nothing at all", () => {
    for (const capability of capabilities) expect(mayDo({ kind: "anonymous" }, capability)).toBe(false);
  });

  test("a person without roles may do nothing at all", () => {
    for (const capability of capabilities) expect(mayDo(person([]), capability)).toBe(false);
  });

  test("a plain key may do what its scopes name and nothing that acts for a person", () => {
    const sender: Actor = { kind: "key", ...keyWith("transactions:write") };
    const allowed = capabilities.filter((capability) => mayDo(sender, capability));
    expect(allowed).toEqual(["intake.send"]);
  });

  test("a key that acts for a person has the overlap of its scopes and that person's roles", () => {
    const byKey = person(["reviewer"], keyWith("cases:decide"));
    const allowed = capabilities.filter((capability) => mayDo(byKey, capability));
    expect(allowed).toEqual(["cases.read", "desk.work"]);
    expect(mayDo(person(["auditor"], keyWith(...PERSONAL_SCOPES)), "desk.work")).toBe(false);
    const withReports = person(["reviewer"], keyWith("cases:decide", "reports:read"));
    expect(mayDo(withReports, "trail.read")).toBe(false);
    expect(mayDo(withReports, "losses.read")).toBe(false);
  });

  test("nobody who checks the work or gives the rights may do the work", () => {
    const work: Capability[] = [
      "desk.work",
      "case.correct",
      "case.assign",
      "policy.propose",
      "policy.approve",
    ];
    for (const capability of work) {
      expect(mayDo(person(["auditor"]), capability)).toBe(false);
      expect(mayDo(person(["administrator"]), capability)).toBe(false);
    }
  });

  test("acts of a person are refused to keys and jobs, and refusals say so", () => {
    const base = { now: () => new Date(), requestId: "r", idempotency: null };
    const ctx = (actor: Actor) => ({ ...base, actor, db: undefined as never });
    expect(() => demandPerson(ctx({ kind: "system", job: "j" }), "desk.work")).toThrow(/Only a person/);
    expect(() => demandPerson(ctx({ kind: "key", ...keyWith("cases:decide") }), "desk.work")).toThrow(
      /Only a person/,
    );
    expect(() => demand(ctx(person(["auditor"])), "people.manage")).toThrow(/role does not allow/);
  });

  test("every capability is given to somebody", () => {
    for (const capability of capabilities) {
      const grant: { roles: readonly string[] } = CAPABILITIES[capability];
      expect(grant.roles.length > 0 || scopesFor(capability).length > 0).toBe(true);
      for (const role of grant.roles) expect(ROLES).toContain(role);
    }
  });
});

describe("where sign-in leads on to", () => {
  test.each([
    ["/desk", "/desk"],
    ["/cases/0199?tab=notes#last", "/cases/0199?tab=notes#last"],
    ["/trail?act=person.", "/trail?act=person."],
  ])("%s stays", (from, onward) => {
    expect(localPath(from)).toBe(onward);
  });

  test.each([
    undefined,
    "",
    "desk",
    "//evil.example",
    "/\\evil.example",
    "/desk\\..\\evil",
    "https://evil.example/",
    "javascript:alert(1)",
    "/\tevil",
    "/%0d%0a\r\nSet-Cookie: x",
    "/sign-in",
    "/sign-in?from=/desk",
  ])("%j leads to the start page", (from) => {
    expect(localPath(from)).toBe("/");
  });
});

test("the session cookie is bound to the host where the site is served over HTTPS", () => {
  expect(sessionCookie("https://desk.example")).toEqual({ name: "__Host-cupel.session", secure: true });
  expect(sessionCookie("http://localhost:3000")).toEqual({ name: "cupel.session", secure: false });
});

test("a session ends twelve hours after signing in, however busy it was", () => {
  const claims = {
    sub: "0199a000-0000-7000-8000-000000000001",
    sid: "0199a000-0000-7000-8000-000000000002",
    sessionVersion: 1,
    signedInAt: 1_000_000,
  };
  expect(isOverLongest(claims, new Date((1_000_000 + 12 * 3600 - 1) * 1000))).toBe(false);
  expect(isOverLongest(claims, new Date((1_000_000 + 12 * 3600) * 1000))).toBe(true);
});

test("a page's scripts need its nonce; nothing may frame it or take its forms elsewhere", () => {
  const policy = contentSecurityPolicy({ nonce: "abc", overHttps: true, development: false });
  const directives = new Map(
    policy.split("; ").map((directive) => {
      const [name = "", ...values] = directive.split(" ");
      return [name, values.join(" ")];
    }),
  );
  expect(directives.get("script-src")).toBe("'self' 'nonce-abc'");
  expect(directives.get("frame-ancestors")).toBe("'none'");
  expect(directives.get("form-action")).toBe("'self'");
  expect(directives.get("base-uri")).toBe("'none'");
  expect(directives.get("object-src")).toBe("'none'");
  expect(directives.has("upgrade-insecure-requests")).toBe(true);
});
