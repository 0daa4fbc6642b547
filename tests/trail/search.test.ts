import { beforeAll, expect, test } from "vitest";
import { inTransaction } from "@/db/tx";
import { addKey } from "@/lib/keys/add";
import { addPerson } from "@/lib/people/add";
import { deactivatePerson } from "@/lib/people/set-state";
import { appendTrail } from "@/lib/trail/append";
import { TrailInput } from "@/lib/trail/schema";
import { searchTrail } from "@/lib/trail/search";
import { verifyTrailAsked } from "@/lib/trail/verify-asked";
import { testDatabase } from "../support/database";
import { contextOf, makePerson } from "../support/people";

const { db } = await testDatabase();
const administrator = await makePerson(db, ["administrator"]);
const auditor = await makePerson(db, ["auditor"]);
const asAdministrator = contextOf(db, administrator);
const asAuditor = contextOf(db, auditor);
const search = (filters: Record<string, unknown>) => searchTrail(asAuditor, TrailInput.parse(filters));

let addedId = "";
let keyId = "";

beforeAll(async () => {
  const input = { email: "new@cupel.test", name: "Nora New", roles: ["reviewer" as const], timeZone: "UTC" };
  const { person } = await addPerson(asAdministrator, input);
  addedId = person.id;
  const key = { name: "Feed", source: "feed", scopes: ["transactions:write" as const] };
  keyId = (await addKey(asAdministrator, key)).key.id;
  await deactivatePerson(asAdministrator, { id: addedId });
});

test("filters by act, by family of acts, by person and by subject, newest first", async () => {
  const acts = async (filters: Record<string, unknown>) =>
    (await search(filters)).items.map((item) => item.act);
  expect(await acts({ act: "person.added" })).toEqual(["person.added"]);
  expect(await acts({ act: "person." })).toEqual(["person.deactivated", "person.added"]);
  expect(await acts({ person: administrator.personId })).toEqual([
    "person.deactivated",
    "key.added",
    "person.added",
  ]);
  expect(await acts({ subject: `key:${keyId}` })).toEqual(["key.added"]);
  expect(await acts({ person: administrator.personId, act: "key." })).toEqual(["key.added"]);
});

test("shows today's names beside the references", async () => {
  const [entry] = (await search({ act: "person.added" })).items;
  expect(entry).toMatchObject({
    actor: { kind: "person", id: administrator.personId, name: administrator.name, onBehalfOf: null },
    subject: { kind: "person", id: addedId, name: "Nora New" },
    facts: { roles: ["reviewer"] },
  });
});

test("takes entries from the first moment on and up to the second", async () => {
  const [entry] = (await search({ act: "person.added" })).items;
  const at = entry?.at ?? "";
  const later = new Date(Date.parse(at) + 1).toISOString();
  const found = async (from: string, to: string) =>
    (await search({ act: "person.added", from, to })).items.length;
  expect(await found(at, later)).toBe(1);
  expect(await found(later, "2100-01-01T00:00:00Z")).toBe(0);
  expect(await found("2000-01-01T00:00:00Z", at)).toBe(0);
});

test("each search is an entry; further pages of it are not", async () => {
  await search({ act: "no.such_act" });
  const recorded = await search({ act: "trail.read", person: auditor.personId, limit: 1 });
  expect(recorded.items[0]).toMatchObject({ act: "trail.read", facts: { filters: ["act"] } });
  const before = (await search({ act: "trail.read", limit: 500 })).items.length;
  const first = await search({ limit: 1 });
  await search({ limit: 1, cursor: first.next });
  const after = (await search({ act: "trail.read", limit: 500 })).items.length;
  // The two counting searches are entries too: one before the second count, and the one of the first page.
  expect(after - before).toBe(2);
});

test("a search leaves ids, moments and acts that exist in its entry, and nothing else that was typed", async () => {
  const factsOf = async (filters: Record<string, unknown>) => {
    await search(filters);
    return (await search({ act: "trail.read", person: auditor.personId, limit: 1 })).items[0]?.facts;
  };
  expect(await factsOf({})).toEqual({ filters: [] });
  expect(await factsOf({ act: "person.added" })).toEqual({ filters: ["act"], act: "person.added" });
  expect(await factsOf({ act: "person." })).toEqual({ filters: ["act"], act: "person." });
  expect(await factsOf({ person: addedId, subject: `person:${addedId}` })).toEqual({
    filters: ["person", "subject"],
    person: addedId,
    subjectId: addedId,
  });
  const from = "2026-01-01T00:00:00Z";
  expect(await factsOf({ from })).toEqual({ filters: ["from"], from: "2026-01-01T00:00:00.000Z" });
  for (const typed of ["Nora New", "nora.", "PERSON.", "person", "person.added by Nora", "%."]) {
    expect(await factsOf({ act: typed })).toEqual({ filters: ["act"] });
  }
  for (const typed of ["person:Nora New", "nora_new:Nora", `person:Nora ${addedId}`]) {
    expect(await factsOf({ subject: typed })).toEqual({ filters: ["subject"] });
  }
  expect(await factsOf({ subject: `nora_new:${addedId}` })).toEqual({
    filters: ["subject"],
    subjectId: addedId,
  });
  // What no case has for its number might be any number, such as a telephone's.
  expect(await factsOf({ case: "442071234567" })).toEqual({ filters: ["case"] });
  expect(await factsOf({ case: addedId })).toEqual({ filters: ["case"], caseId: addedId });
});

test("pages meet without gap or repeat, and the last one says so", async () => {
  const all = (await search({ person: administrator.personId })).items.map((item) => item.seq);
  const seen: number[] = [];
  let cursor: string | null = null;
  do {
    const page = await search({
      person: administrator.personId,
      limit: 2,
      ...(cursor !== null && { cursor }),
    });
    seen.push(...page.items.map((item) => item.seq));
    cursor = page.next;
  } while (cursor !== null);
  expect(seen).toEqual(all);
});

test("a cursor of somebody's own making is refused by name", async () => {
  await expect(search({ cursor: "MQ" })).rejects.toMatchObject({
    code: "invalid",
    errors: [{ path: "cursor" }],
  });
});

test("a verification is an entry that says how it ended", async () => {
  const view = await verifyTrailAsked(asAuditor, {});
  expect(view).toMatchObject({ intact: true, firstBrokenSeq: null, notedStands: null });
  const [entry] = (await search({ act: "trail.verified", limit: 1 })).items;
  expect(entry?.facts).toEqual(view);
});

test("reviewers and administrators may not read the trail", async () => {
  const reviewer = await makePerson(db, ["reviewer"]);
  for (const actor of [reviewer, administrator]) {
    await expect(searchTrail(contextOf(db, actor), TrailInput.parse({}))).rejects.toMatchObject({
      code: "forbidden",
    });
  }
});

test("acts of a key that acts for somebody are found by that person, and name both", async () => {
  const key = { id: keyId, source: "feed", scopes: [] };
  await inTransaction(db, (tx) =>
    appendTrail(contextOf(db, { ...auditor, key }), tx, {
      act: "case.noted",
      subjectKind: "case",
      subjectId: "c",
      facts: {},
    }),
  );
  const [entry] = (await search({ act: "case.noted", person: auditor.personId })).items;
  expect(entry?.actor).toEqual({
    kind: "key",
    id: keyId,
    name: "Feed",
    onBehalfOf: { id: auditor.personId, name: auditor.name },
  });
});
