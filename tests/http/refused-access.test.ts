import { and, eq } from "drizzle-orm";
import { afterAll, expect, inject, test } from "vitest";
import { createDatabase } from "@/db/client";
import { trail } from "@/db/schema/trail";
import { addKey } from "@/lib/keys/add";
import { newId } from "@/lib/new-id";
import { contextOf, makePerson, TEST_PASSWORD } from "../support/people";
import { signedIn, visit } from "../support/session";

const { url } = inject("app");
const { db, close } = createDatabase(inject("mariadb").url);
afterAll(close);

const refusalsOf = async (actorId: string) => {
  const rows = await db
    .select()
    .from(trail)
    .where(and(eq(trail.actorId, actorId), eq(trail.act, "access.refused")));
  return rows.map(({ subjectKind, subjectId, facts }) => ({
    subject: `${subjectKind}:${subjectId}`,
    facts: JSON.parse(facts) as unknown,
  }));
};

test("who was refused where is in the trail, once an hour, and without what was asked for", async () => {
  const { email, personId } = await makePerson(db, ["reviewer"]);
  const jar = await signedIn(url, email, TEST_PASSWORD);
  const secret = newId();
  for (let n = 0; n < 3; n++) {
    expect((await visit(url, `/api/floor?search=${secret}`, jar)).status).toBe(403);
    expect((await visit(url, `/people?search=${secret}`, jar)).status).toBe(403);
    const revoke = { method: "POST", body: JSON.stringify({ secret }) };
    expect((await visit(url, `/api/keys/${secret}/revoke`, jar, revoke)).status).toBe(403);
  }
  const refusals = await refusalsOf(personId);
  expect(refusals).toHaveLength(3);
  expect(refusals).toEqual(
    expect.arrayContaining([
      { subject: "route:GET /api/floor", facts: { route: "GET /api/floor", capability: "floor.read" } },
      { subject: "route:/people", facts: { route: "/people", capability: "people.read" } },
      {
        subject: "route:POST /api/keys/{id}/revoke",
        facts: { route: "POST /api/keys/{id}/revoke", capability: "keys.manage" },
      },
    ]),
  );
  expect(JSON.stringify(refusals)).not.toContain(secret);
});

test("a key's refusals are in the trail as the key's; a stranger's are not", async () => {
  const ctx = contextOf(db, await makePerson(db, ["administrator"]));
  const { secret, key } = await addKey(ctx, { name: newId(), source: "s", scopes: ["reports:read"] });
  const ask = (headers: Record<string, string>) => fetch(new URL("/api/queue", url), { headers });
  const before = await refusalsOf("anonymous");
  expect((await ask({ Authorization: `Bearer ${secret}` })).status).toBe(403);
  expect((await ask({})).status).toBe(401);
  expect(await refusalsOf(key.id)).toEqual([
    { subject: "route:GET /api/queue", facts: { route: "GET /api/queue", capability: "cases.read" } },
  ]);
  expect(await refusalsOf("anonymous")).toEqual(before);
});
