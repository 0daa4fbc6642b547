import { eq } from "drizzle-orm";
import { expect, test } from "vitest";
import { apiKeys, people } from "@/db/schema/people";
import { identify } from "@/lib/auth/identify";
import { addKey } from "@/lib/keys/add";
import { listKeys } from "@/lib/keys/read";
import { revokeKey } from "@/lib/keys/revoke";
import { scopesProblem } from "@/lib/keys/rules";
import { AddKeyInput } from "@/lib/keys/schema";
import { newId } from "@/lib/new-id";
import { testDatabase } from "../support/database";
import { contextOf, makePerson } from "../support/people";

const { db } = await testDatabase();
const administrator = await makePerson(db, ["administrator"]);
const ctx = contextOf(db, administrator);
const input = (more: Record<string, unknown> = {}) =>
  AddKeyInput.parse({ name: `Key ${newId()}`, source: "core", scopes: ["transactions:write"], ...more });
const callWith = (secret: string | null) =>
  identify("http://cupel.test/api", new Headers({ Authorization: `Bearer ${secret}` }), db, new Date());

test("a key is shown once, kept as a hash, and lets its carrier in until it is revoked", async () => {
  const { key, secret } = await addKey(ctx, input());
  expect(secret).toMatch(/^cupel_[A-Za-z0-9_-]{43}$/);
  expect(JSON.stringify(await db.select().from(apiKeys))).not.toContain(secret);
  expect(await callWith(secret)).toEqual({
    kind: "key",
    id: key.id,
    source: "core",
    scopes: ["transactions:write"],
  });
  // RFC 9110, section 11.1: the scheme's name is case-insensitive.
  const lower = new Headers({ Authorization: `bearer ${secret}` });
  expect(await identify("http://cupel.test/api", lower, db, new Date())).toMatchObject({ id: key.id });
  const listed = (await listKeys(ctx)).items.find((item) => item.id === key.id);
  expect(listed?.lastUsedAt).not.toBeNull();
  await revokeKey(ctx, { id: key.id });
  await expect(callWith(secret)).rejects.toMatchObject({ code: "unauthenticated" });
  await expect(callWith("cupel_nothing")).rejects.toMatchObject({ code: "unauthenticated" });
});

test("a key that acts for a person carries both, and stops when the person's account is closed", async () => {
  const reviewer = await makePerson(db, ["reviewer"]);
  const scopes = ["cases:decide"];
  const { key, secret } = await addKey(ctx, input({ scopes, actsForPersonId: reviewer.personId }));
  expect(await callWith(secret)).toMatchObject({
    kind: "person",
    personId: reviewer.personId,
    roles: ["reviewer"],
    key: { id: key.id, scopes },
  });
  await db.update(people).set({ state: "deactivated" }).where(eq(people.id, reviewer.personId));
  await expect(callWith(secret)).rejects.toMatchObject({ code: "unauthenticated" });
  const another = input({ scopes, actsForPersonId: reviewer.personId });
  await expect(addKey(ctx, another)).rejects.toMatchObject({ errors: [{ path: "actsForPersonId" }] });
});

test.each([
  [["cases:decide"], null, /needs a person/],
  [["transactions:write"], ["reviewer"], /only with/],
  [["policy:write"], ["reviewer"], /roles do not allow/],
  [["cases:decide"], ["auditor"], /roles do not allow/],
  [["cases:read", "cases:read"], null, /twice/],
  [["policy:write"], ["risk_manager"], null],
  [["cases:decide", "cases:read"], ["supervisor"], null],
  [["transactions:write", "reports:read"], null, null],
] as const)("scopes %j for roles %j: %s", (scopes, roles, message) => {
  const problem = scopesProblem(scopes, roles);
  if (message === null) expect(problem).toBeNull();
  else expect(problem).toMatch(message);
});

test("names are unique, so that a key can be told by its name", async () => {
  const given = input();
  await addKey(ctx, given);
  await expect(addKey(ctx, given)).rejects.toMatchObject({ code: "conflict", errors: [{ path: "name" }] });
});

test("auditors read the keys' list and nobody but administrators makes or ends one", async () => {
  const auditor = contextOf(db, await makePerson(db, ["auditor"]));
  const supervisor = contextOf(db, await makePerson(db, ["supervisor"]));
  const { items } = await listKeys(auditor);
  const [key] = items;
  await expect(listKeys(supervisor)).rejects.toMatchObject({ code: "forbidden" });
  for (const other of [auditor, supervisor]) {
    await expect(addKey(other, input())).rejects.toMatchObject({ code: "forbidden" });
    await expect(revokeKey(other, { id: key?.id ?? "" })).rejects.toMatchObject({ code: "forbidden" });
  }
});
