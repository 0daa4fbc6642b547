import { eq } from "drizzle-orm";
import { beforeAll, expect, test } from "vitest";
import { outbox } from "@/db/schema/mail";
import { people } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import { assignCase } from "@/lib/cases/assign";
import { claimCase } from "@/lib/cases/claim";
import { mailAssigned } from "@/lib/cases/mail-assigned";
import type { PersonActor } from "@/lib/context";
import { assignMany } from "@/lib/floor/assign-many";
import { testWorld } from "../support/world";

const APP_URL = "https://desk.example";
const world = await testWorld();
const { db } = world;
const supervisor = await world.person("supervisor");
const job = world.ctx({ kind: "system", job: "cases.assigned-mail" });
const run = () => mailAssigned(job, { appUrl: APP_URL });

let seed = 1;
const open = async (count: number) => {
  const made = await world.waitingCases(count, { seed: seed++ });
  return made.map(({ caseId }) => caseId);
};
const give = (caseIds: string[], to: PersonActor | null, by = supervisor) =>
  assignMany(world.ctx(by), { caseIds, personId: to?.personId ?? null });
const mailTo = (person: PersonActor) => db.select().from(outbox).where(eq(outbox.personId, person.personId));
const toldOf = async (person: PersonActor) => {
  const rows = await db.select().from(trail).where(eq(trail.subjectId, person.personId));
  return rows
    .filter(({ act }) => act === "person.told_of_cases")
    .map(({ facts }) => (JSON.parse(facts) as { cases: string[] }).cases);
};

beforeAll(async () => {
  const early = await world.person("reviewer");
  await give(await open(1), early);
  await run();
  // What was given before anybody could be told stays untold.
  expect(await mailTo(early)).toEqual([]);
});

test("whoever is given cases by a supervisor gets one message about them, though several servers look at once", async () => {
  const mira = await world.person("reviewer");
  const tove = await world.person("reviewer");
  const [one, two, three] = (await open(3)) as [string, string, string];
  await give([one, two], mira);
  await assignCase(world.ctx(supervisor), { id: three, personId: tove.personId });
  await Promise.all([run(), run(), run()]);
  await run();
  const [mail, ...more] = await mailTo(mira);
  expect(more).toEqual([]);
  expect(mail).toMatchObject({
    kind: "case_assigned",
    state: "queued",
    subject: "2 cases are assigned to you",
  });
  for (const id of [one, two]) expect(mail?.text).toContain(`${APP_URL}/cases/${id}`);
  expect(mail?.text).toContain(`${APP_URL}/cases?assignee=me`);
  expect(mail?.text).not.toContain(three);
  expect(await mailTo(tove)).toMatchObject([{ subject: "A case is assigned to you" }]);
  expect((await toldOf(mira)).map((cases) => cases.sort())).toEqual([[one, two].sort()]);
});

test("times are the reader's own, the most urgent cases are named and the rest counted", async () => {
  const mira = await world.person("reviewer");
  await db.update(people).set({ timeZone: "Asia/Tokyo" }).where(eq(people.id, mira.personId));
  await give(await open(12), mira);
  await run();
  const [mail] = await mailTo(mira);
  expect(mail?.subject).toBe("12 cases are assigned to you");
  expect(mail?.text.match(/\/cases\/[0-9a-f-]{36}/g)).toHaveLength(10);
  expect(mail?.text).toContain("and 2 others");
  expect(mail?.text).toContain("by the clock of Asia/Tokyo");
  expect(mail?.text).toMatch(/Case \d+, due \d+ March 2026 at \d\d:\d\d: /);
});

test("nobody is told twice of a case, nor of one they took themselves, have in hand or lost again", async () => {
  const mira = await world.person("reviewer");
  const tove = await world.person("reviewer");
  const [back, inHand, gone, own] = (await open(4)) as [string, string, string, string];
  await give([back], mira);
  await run();
  await give([back], tove);
  await give([back], mira);
  await give([inHand, gone], mira);
  await claimCase(world.ctx(mira), { id: inHand });
  await give([gone], tove);
  await give([own], supervisor);
  await run();
  expect(await toldOf(mira)).toEqual([[back]]);
  expect(await toldOf(tove)).toEqual([[gone]]);
  expect(await toldOf(supervisor)).toEqual([]);
  expect(await mailTo(mira)).toHaveLength(1);
});

test("a person who has left is told nothing", async () => {
  const mira = await world.person("reviewer");
  await give(await open(1), mira);
  await db.update(people).set({ state: "deactivated" }).where(eq(people.id, mira.personId));
  await run();
  expect(await mailTo(mira)).toEqual([]);
});
