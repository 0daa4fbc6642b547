import { eq } from "drizzle-orm";
import { beforeAll, describe, expect, test } from "vitest";
import { caseNotes, cases, noteDrafts } from "@/db/schema/cases";
import { policies } from "@/db/schema/policies";
import { trail } from "@/db/schema/trail";
import { transactions } from "@/db/schema/transactions";
import { assignCase } from "@/lib/cases/assign";
import { claimCase } from "@/lib/cases/claim";
import { escalateCase } from "@/lib/cases/escalate";
import { noteOnCase } from "@/lib/cases/note";
import { caseView } from "@/lib/cases/read";
import { releaseCase } from "@/lib/cases/release";
import { MOST_CLAIMS } from "@/lib/cases/rules";
import { saveDraft } from "@/lib/cases/save-draft";
import { setCaseWaiting } from "@/lib/cases/wait";
import type { PersonActor } from "@/lib/context";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let mira: PersonActor;
let tove: PersonActor;
let supervisor: PersonActor;
let seed = 1_000;

beforeAll(async () => {
  world = await testWorld();
  mira = await world.person("reviewer");
  tove = await world.person("reviewer");
  supervisor = await world.person("supervisor");
});

const minutes = (count: number) => new Date(WORLD_START.getTime() + count * 60_000);
const oneCase = async (options = {}) =>
  ((await world.waitingCases(1, { seed: seed++, ...options })) as [WaitingCase])[0].caseId;
const rowOf = async (id: string) => (await world.db.select().from(cases).where(eq(cases.id, id)))[0];
const actsOf = async (id: string) =>
  (await world.db.select({ act: trail.act }).from(trail).where(eq(trail.caseId, id)).orderBy(trail.seq)).map(
    ({ act }) => act,
  );
const refused = (code: string) => ({ name: "KnownError", code });

describe("twenty people claiming one case at once", () => {
  test("leave it with one holder and tell the others so", async () => {
    const people = await Promise.all(Array.from({ length: 20 }, () => world.person("reviewer")));
    const id = await oneCase();
    const results = await Promise.allSettled(people.map((person) => claimCase(world.ctx(person), { id })));
    const winners = people.filter((_, index) => results[index]?.status === "fulfilled");
    expect(winners).toHaveLength(1);
    for (const result of results) {
      if (result.status === "rejected") expect(result.reason).toMatchObject(refused("conflict"));
    }
    expect(await rowOf(id)).toMatchObject({ state: "claimed", claimedBy: winners[0]?.personId, revision: 2 });
    expect(await actsOf(id)).toEqual(["case.claimed"]);
  });
});

describe("a claim", () => {
  test("is renewed by its holder without a new revision or another line in the trail", async () => {
    const id = await oneCase();
    const first = await claimCase(world.ctx(mira), { id });
    const renewed = await claimCase(world.ctx(mira, minutes(6)), { id });
    expect(first.claimExpiresAt).toBe(minutes(10).toISOString());
    expect(renewed).toMatchObject({ revision: first.revision, claimExpiresAt: minutes(16).toISOString() });
    expect(await actsOf(id)).toEqual(["case.claimed"]);
  });

  test("that has run out can be taken by somebody else, and the half-written note waits for its author", async () => {
    const id = await oneCase();
    await claimCase(world.ctx(mira), { id });
    await saveDraft(world.ctx(mira, minutes(2)), { id, body: "Called the customer, no ans" });
    await expect(claimCase(world.ctx(tove, minutes(9)), { id })).rejects.toMatchObject(refused("conflict"));
    expect((await claimCase(world.ctx(tove, minutes(10)), { id })).state).toBe("claimed");
    expect(await rowOf(id)).toMatchObject({ claimedBy: tove.personId });
    const mine = await caseView(world.ctx(mira, minutes(11)), { id });
    expect(mine).toMatchObject({ draft: "Called the customer, no ans", mine: false });
    expect((await caseView(world.ctx(tove, minutes(11)), { id })).draft).toBe("");
    await expect(claimCase(world.ctx(mira, minutes(11)), { id })).rejects.toMatchObject(refused("conflict"));
  });

  test("is refused to a person who holds as many cases as one may, even when they ask for many at once", async () => {
    const person = await world.person("reviewer");
    const many = await world.waitingCases(MOST_CLAIMS + 4, { seed: seed++ });
    const results = await Promise.allSettled(
      many.map(({ caseId }) => claimCase(world.ctx(person), { id: caseId })),
    );
    expect(results.filter(({ status }) => status === "fulfilled")).toHaveLength(MOST_CLAIMS);
    const held = await world.db.select().from(cases).where(eq(cases.claimedBy, person.personId));
    expect(held).toHaveLength(MOST_CLAIMS);
    await releaseCase(world.ctx(person), { id: held[0]?.id as string });
    const left = many.find(({ caseId }) => !held.some(({ id }) => id === caseId)) as WaitingCase;
    expect((await claimCase(world.ctx(person), { id: left.caseId })).state).toBe("claimed");
  });

  test("is given back by its holder or by a supervisor, not by a colleague", async () => {
    const id = await oneCase();
    await claimCase(world.ctx(mira), { id });
    await expect(releaseCase(world.ctx(tove), { id })).rejects.toMatchObject(refused("conflict"));
    expect(await releaseCase(world.ctx(supervisor), { id })).toMatchObject({ state: "open", revision: 3 });
    expect(await actsOf(id)).toEqual(["case.claimed", "case.released"]);
  });

  test("by choice from the list is refused to reviewers where the policy has them take the next case", async () => {
    const set = (takeNextOnly: boolean) =>
      world.db
        .update(policies)
        .set({ terms: { ...DEFAULT_TERMS, takeNextOnly } })
        .where(eq(policies.version, 1));
    const [free, assigned, held] = [await oneCase(), await oneCase(), await oneCase()];
    await claimCase(world.ctx(mira), { id: held });
    await assignCase(world.ctx(supervisor), { id: assigned, personId: mira.personId });
    await set(true);
    try {
      await expect(claimCase(world.ctx(mira), { id: free })).rejects.toMatchObject(refused("forbidden"));
      expect((await claimCase(world.ctx(mira), { id: assigned })).state).toBe("claimed");
      expect((await claimCase(world.ctx(mira, minutes(12)), { id: held })).state).toBe("claimed");
      expect((await claimCase(world.ctx(supervisor), { id: free })).state).toBe("claimed");
    } finally {
      await set(false);
    }
    for (const id of [free, assigned, held]) await releaseCase(world.ctx(supervisor), { id });
  });

  test("on a case that is not there answers so", async () => {
    const id = "0197a000-0000-7000-8000-000000000000";
    await expect(claimCase(world.ctx(mira), { id })).rejects.toMatchObject(refused("not_found"));
  });
});

describe("an escalated case", () => {
  test("leaves its reviewer with a note that says why, and stays with the supervisors when one gives it back", async () => {
    const id = await oneCase();
    await claimCase(world.ctx(mira), { id });
    await saveDraft(world.ctx(mira), { id, body: "half a th" });
    await escalateCase(world.ctx(mira), { id, note: "Director's account" });
    const notes = await world.db.select().from(caseNotes).where(eq(caseNotes.caseId, id));
    expect(notes).toMatchObject([{ body: "Director's account", personId: mira.personId }]);
    expect(await world.db.select().from(noteDrafts).where(eq(noteDrafts.caseId, id))).toEqual([]);
    await expect(claimCase(world.ctx(tove), { id })).rejects.toMatchObject(refused("forbidden"));
    await claimCase(world.ctx(supervisor), { id });
    expect((await releaseCase(world.ctx(supervisor), { id })).state).toBe("escalated");
    const [entry] = await world.db.select().from(trail).where(eq(trail.act, "case.escalated"));
    expect(entry?.facts).not.toContain("Director");
  });
});

describe("a case set aside", () => {
  test("is its reviewer's until then, and needs to come back before its hold ends", async () => {
    const id = await oneCase({ held: true });
    await claimCase(world.ctx(mira), { id });
    const late = minutes(24 * 60).toISOString();
    await expect(
      setCaseWaiting(world.ctx(mira), { id, until: late, note: "Customer abroad" }),
    ).rejects.toMatchObject({ code: "rule_broken", errors: [{ path: "until" }] });
    const until = minutes(90).toISOString();
    await setCaseWaiting(world.ctx(mira), { id, until, note: "Customer abroad" });
    expect(await rowOf(id)).toMatchObject({ state: "waiting", assignedTo: mira.personId, claimedBy: null });
    await expect(claimCase(world.ctx(tove), { id })).rejects.toMatchObject(refused("forbidden"));
    expect((await claimCase(world.ctx(mira), { id })).state).toBe("claimed");
    expect((await rowOf(id))?.waitUntil).toBeNull();
  });
});

describe("assigning", () => {
  test("takes the case from its holder and keeps it for the person it was given to", async () => {
    const id = await oneCase();
    await claimCase(world.ctx(mira), { id });
    await assignCase(world.ctx(supervisor), { id, personId: tove.personId });
    expect(await rowOf(id)).toMatchObject({ state: "open", claimedBy: null, assignedTo: tove.personId });
    await expect(claimCase(world.ctx(mira), { id })).rejects.toMatchObject(refused("forbidden"));
    const facts = await world.db
      .select({ facts: trail.facts })
      .from(trail)
      .where(eq(trail.act, "case.assigned"));
    expect(JSON.parse(facts.at(-1)?.facts ?? "{}")).toMatchObject({
      to: tove.personId,
      claimEndedOf: mira.personId,
    });
  });

  test("is a supervisor's, and only to people who may decide", async () => {
    const id = await oneCase();
    await expect(assignCase(world.ctx(mira), { id, personId: mira.personId })).rejects.toMatchObject(
      refused("forbidden"),
    );
    const auditor = await world.person("auditor");
    await expect(assignCase(world.ctx(supervisor), { id, personId: auditor.personId })).rejects.toMatchObject(
      { code: "invalid", errors: [{ path: "personId" }] },
    );
    expect(await rowOf(id)).toMatchObject({ assignedTo: null, revision: 1 });
  });
});

describe("notes", () => {
  test("are kept with their author, change no revision, and take the place of the draft", async () => {
    const id = await oneCase();
    await saveDraft(world.ctx(mira), { id, body: "Shop conf" });
    expect(await noteOnCase(world.ctx(mira), { id, body: "Shop confirmed it" })).toMatchObject({
      revision: 1,
    });
    const view = await caseView(world.ctx(mira), { id });
    expect(view.notes).toMatchObject([{ by: { name: mira.name }, body: "Shop confirmed it" }]);
    expect(view.draft).toBe("");
    await saveDraft(world.ctx(mira), { id, body: "  " });
    expect(await world.db.select().from(noteDrafts).where(eq(noteDrafts.caseId, id))).toEqual([]);
  });

  test("are refused on a colleague's case", async () => {
    const id = await oneCase();
    await assignCase(world.ctx(supervisor), { id, personId: tove.personId });
    await expect(noteOnCase(world.ctx(mira), { id, body: "Let me in" })).rejects.toMatchObject(
      refused("forbidden"),
    );
    await expect(caseView(world.ctx(mira), { id })).rejects.toMatchObject(refused("forbidden"));
  });
});

test("a payment that is no longer held can wait past the end of its hold", async () => {
  const id = await oneCase({ held: true });
  const row = await rowOf(id);
  await world.db
    .update(transactions)
    .set({ paymentState: "released" })
    .where(eq(transactions.id, row?.transactionId as string));
  await claimCase(world.ctx(mira), { id });
  const until = minutes(3 * 24 * 60).toISOString();
  expect((await setCaseWaiting(world.ctx(mira), { id, until, note: "Asked the bank" })).state).toBe(
    "waiting",
  );
});
