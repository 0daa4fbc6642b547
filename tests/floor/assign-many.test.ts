import { and, eq, inArray } from "drizzle-orm";
import { beforeEach, expect, test } from "vitest";
import { cases } from "@/db/schema/cases";
import { people } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import { claimCase } from "@/lib/cases/claim";
import { assignMany } from "@/lib/floor/assign-many";
import { releaseMany } from "@/lib/floor/release-many";
import { AssignManyInput, ReleaseManyInput } from "@/lib/floor/schema";
import { newId } from "@/lib/new-id";
import { testWorld } from "../support/world";

const world = await testWorld();
const { db } = world;
const anna = await world.person("reviewer");
const bert = await world.person("reviewer");
const chief = await world.person("supervisor");
const deputy = await world.person("supervisor");

let ids: string[];
let seed = 0;
beforeEach(async () => {
  const made = await world.waitingCases(20, { seed: ++seed });
  ids = made.map(({ caseId }) => caseId);
});

const rowsOf = (caseIds: readonly string[]) =>
  db
    .select({
      id: cases.id,
      state: cases.state,
      assignedTo: cases.assignedTo,
      claimedBy: cases.claimedBy,
      revision: cases.revision,
    })
    .from(cases)
    .where(inArray(cases.id, [...caseIds]));
const assignTo = (personId: string | null, caseIds = ids, by = chief) =>
  assignMany(world.ctx(by), { caseIds, personId });
const actsOn = (act: string) =>
  db
    .select({ caseId: trail.caseId, facts: trail.facts })
    .from(trail)
    .where(and(inArray(trail.caseId, ids), eq(trail.act, act)));

test("many cases go to one person, with an entry in the trail of each", async () => {
  const { changed } = await assignTo(anna.personId);
  expect([...changed].sort()).toEqual([...ids].sort());
  const rows = await rowsOf(ids);
  expect(
    rows.every((row) => row.assignedTo === anna.personId && row.state === "open" && row.revision === 2),
  ).toBe(true);
  const entries = await actsOn("case.assigned");
  expect(entries.map(({ caseId }) => caseId).sort()).toEqual([...ids].sort());
  expect(JSON.parse(entries[0]?.facts ?? "")).toMatchObject({ to: anna.personId, from: null, revision: 2 });
});

test("cases that are the person's already keep their revision, so that a verdict on its way still fits", async () => {
  await assignTo(anna.personId, ids.slice(0, 5));
  const { changed } = await assignTo(anna.personId, ids.slice(0, 8));
  expect([...changed].sort()).toEqual(ids.slice(5, 8).sort());
  expect((await rowsOf(ids.slice(0, 8))).every(({ revision }) => revision === 2)).toBe(true);
  expect(await assignTo(anna.personId, ids.slice(0, 8))).toEqual({ changed: [] });
});

test("one case that cannot be assigned keeps all the others where they were, and is named with its reason", async () => {
  const [decided, lapsed] = [ids[3] as string, ids[7] as string];
  await db.update(cases).set({ state: "decided", decidedAt: new Date() }).where(eq(cases.id, decided));
  await db.update(cases).set({ state: "lapsed" }).where(eq(cases.id, lapsed));
  const unknown = newId();
  await expect(assignTo(anna.personId, [...ids, unknown])).rejects.toMatchObject({
    code: "conflict",
    status: 409,
    errors: [
      { path: "caseIds.3", message: expect.stringContaining("decided") },
      { path: "caseIds.7", message: expect.stringContaining("lapsed") },
      { path: "caseIds.20", message: expect.stringContaining("not found") },
    ],
  });
  expect((await rowsOf(ids)).every(({ assignedTo }) => assignedTo === null)).toBe(true);
  expect(await actsOn("case.assigned")).toEqual([]);
});

test("assigning ends somebody else's claim and leaves the person's own alone", async () => {
  await claimCase(world.ctx(anna), { id: ids[0] as string });
  await claimCase(world.ctx(bert), { id: ids[1] as string });
  await assignTo(bert.personId, ids.slice(0, 2));
  const rows = new Map((await rowsOf(ids.slice(0, 2))).map((row) => [row.id, row]));
  expect(rows.get(ids[0] as string)).toMatchObject({
    state: "open",
    claimedBy: null,
    assignedTo: bert.personId,
  });
  expect(rows.get(ids[1] as string)).toMatchObject({ state: "claimed", claimedBy: bert.personId });
  await assignTo(null, ids.slice(0, 2));
  expect(
    (await rowsOf(ids.slice(0, 2))).every((row) => row.assignedTo === null && row.state === "open"),
  ).toBe(true);
});

test("two supervisors who assign the same cases at once both finish, and each case ends with one of them", async () => {
  const reversed = [...ids].reverse();
  for (let round = 0; round < 5; round++) {
    await Promise.all([assignTo(anna.personId), assignTo(bert.personId, reversed, deputy)]);
    const owners = new Set((await rowsOf(ids)).map(({ assignedTo }) => assignedTo));
    expect(owners.size).toBe(1);
    expect([anna.personId, bert.personId]).toContain([...owners][0]);
  }
});

test("a reviewer who claims while a supervisor assigns leaves no case half-way", async () => {
  const mine = ids.slice(0, 4);
  await Promise.all([
    assignTo(bert.personId),
    ...mine.map((id) => claimCase(world.ctx(anna), { id }).catch(() => null)),
  ]);
  for (const row of await rowsOf(ids)) {
    expect(row.assignedTo).toBe(bert.personId);
    expect(row.claimedBy).toBeNull();
    expect(row.state).toBe("open");
  }
});

test("only those who may decide can be given cases, and only supervisors give them", async () => {
  const auditor = await world.person("auditor");
  const gone = await world.person("reviewer");
  await db.update(people).set({ state: "deactivated" }).where(eq(people.id, gone.personId));
  for (const { personId } of [auditor, gone]) {
    await expect(assignTo(personId)).rejects.toMatchObject({
      code: "invalid",
      errors: [{ path: "personId" }],
    });
  }
  await expect(assignTo(bert.personId, ids, anna)).rejects.toMatchObject({ code: "forbidden" });
  await expect(releaseMany(world.ctx(anna), { personId: bert.personId })).rejects.toMatchObject({
    code: "forbidden",
  });
});

test("a person's claims all go back, and their assignments stay", async () => {
  await assignTo(anna.personId, ids.slice(0, 2));
  for (const id of ids.slice(0, 3)) await claimCase(world.ctx(anna), { id });
  await claimCase(world.ctx(bert), { id: ids[5] as string });
  const { changed } = await releaseMany(world.ctx(chief), { personId: anna.personId });
  expect([...changed].sort()).toEqual(ids.slice(0, 3).sort());
  const rows = await rowsOf(ids);
  expect(rows.filter(({ claimedBy }) => claimedBy !== null).map(({ id }) => id)).toEqual([ids[5]]);
  expect(rows.filter(({ assignedTo }) => assignedTo === anna.personId)).toHaveLength(2);
  expect(await actsOn("case.released")).toHaveLength(3);
  expect(await releaseMany(world.ctx(chief), { personId: anna.personId })).toEqual({ changed: [] });
  await releaseMany(world.ctx(chief), { personId: bert.personId });
});

test("named cases go back all or none", async () => {
  await claimCase(world.ctx(anna), { id: ids[0] as string });
  await expect(releaseMany(world.ctx(chief), { caseIds: ids.slice(0, 2) })).rejects.toMatchObject({
    errors: [{ path: "caseIds.1", message: "Nobody holds this case" }],
  });
  expect((await rowsOf(ids.slice(0, 1)))[0]?.claimedBy).toBe(anna.personId);
  expect(await releaseMany(world.ctx(chief), { caseIds: ids.slice(0, 1) })).toEqual({ changed: [ids[0]] });
});

test("a list of cases is between 1 and 500 long and names each once", () => {
  const paths = (caseIds: string[]) =>
    AssignManyInput.safeParse({ caseIds, personId: null }).error?.issues.map(({ path }) => path.join("."));
  expect(paths([])).toEqual(["caseIds"]);
  expect(paths(Array.from({ length: 501 }, () => newId()))).toEqual(["caseIds"]);
  expect(paths([ids[0] as string, ids[0] as string])).toEqual(["caseIds"]);
  expect(paths(ids)).toBeUndefined();
  expect(ReleaseManyInput.safeParse({}).success).toBe(false);
  expect(ReleaseManyInput.safeParse({ caseIds: ids, personId: anna.personId }).success).toBe(false);
});
