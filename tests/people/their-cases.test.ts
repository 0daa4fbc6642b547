import { eq } from "drizzle-orm";
import { beforeAll, expect, test } from "vitest";
import { createDatabase } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { people } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import type { Role } from "@/lib/auth/codes";
import { assignCase } from "@/lib/cases/assign";
import { bringBackDueCases } from "@/lib/cases/bring-back";
import { claimCase } from "@/lib/cases/claim";
import { escalateCase } from "@/lib/cases/escalate";
import { freeStrandedCases } from "@/lib/cases/free-stranded";
import { stopRanking } from "@/lib/cases/ranking/ranking";
import { caseView } from "@/lib/cases/read";
import { setCaseWaiting } from "@/lib/cases/wait";
import type { PersonActor } from "@/lib/context";
import { decideCase } from "@/lib/decisions/decide";
import { setRoles } from "@/lib/people/set-roles";
import { deactivatePerson } from "@/lib/people/set-state";
import { testWorld, type WaitingCase, WORLD_START, type World } from "../support/world";

let world: World;
let administrator: PersonActor;
let supervisor: PersonActor;
let seed = 1;

beforeAll(async () => {
  world = await testWorld();
  administrator = await world.person("administrator");
  supervisor = await world.person("supervisor");
  return () => stopRanking(world.db);
});

const minutes = (count: number) => new Date(WORLD_START.getTime() + count * 60_000);
const { signal } = new AbortController();
const job = (at = WORLD_START) => world.ctx({ kind: "system", job: "test" }, at);
const open = async (count: number) =>
  (await world.waitingCases(count, { seed: seed++ })).map(({ caseId }: WaitingCase) => caseId);
const rowOf = async (id = "") => (await world.db.select().from(cases).where(eq(cases.id, id)))[0];
const claim = (person: PersonActor, id = "") => claimCase(world.ctx(person), { id });
const assign = (person: PersonActor, id = "") =>
  assignCase(world.ctx(supervisor), { id, personId: person.personId });
const deactivate = ({ personId }: PersonActor) =>
  deactivatePerson(world.ctx(administrator), { id: personId });
const giveRoles = ({ personId }: PersonActor, ...roles: Role[]) =>
  setRoles(world.ctx(administrator), { id: personId, roles });
const freedEntries = async (caseId = "") =>
  (await world.db.select().from(trail).where(eq(trail.caseId, caseId))).filter(
    ({ act }) => act === "case.freed",
  );

test("whoever is deactivated leaves no case behind that nobody may take", async () => {
  const mira = await world.person("reviewer");
  const [assigned, claimed, setAside, takenOver, decided] = await open(5);
  for (const id of [assigned, takenOver]) await assign(mira, id);
  for (const id of [claimed, setAside, decided]) await claim(mira, id);
  await setCaseWaiting(world.ctx(mira), {
    id: setAside as string,
    until: minutes(60).toISOString(),
    note: "Calls back",
  });
  await claim(supervisor, takenOver);
  await decideCase(world.ctx(mira), {
    id: decided as string,
    verdict: "legitimate",
    typology: null,
    confidence: "sure",
    seenVersion: 2,
    scoreWasHidden: false,
    together: [],
  });
  const decidedBefore = await rowOf(decided);
  await deactivate(mira);
  expect(await rowOf(assigned)).toMatchObject({ state: "open", assignedTo: null, revision: 3 });
  expect(await rowOf(claimed)).toMatchObject({ state: "open", claimedBy: null, claimExpiresAt: null });
  expect(await rowOf(setAside)).toMatchObject({ state: "waiting", assignedTo: null });
  expect(await rowOf(takenOver)).toMatchObject({
    state: "claimed",
    assignedTo: null,
    claimedBy: supervisor.personId,
  });
  expect(await rowOf(decided)).toEqual(decidedBefore);
  await bringBackDueCases(job(minutes(60)), signal);
  const nora = await world.person("reviewer");
  for (const id of [assigned, claimed, setAside]) {
    await claimCase(world.ctx(nora, minutes(60)), { id: id as string });
  }
  const { timeline } = await caseView(world.ctx(supervisor), { id: assigned as string });
  expect(timeline).toContainEqual(
    expect.objectContaining({
      act: "case.freed",
      by: administrator.name,
      detail: `was assigned to ${mira.name}`,
    }),
  );
});

test("whoever loses the supervisor's role gives escalated cases back and keeps the others", async () => {
  const mira = await world.person("reviewer");
  const sora = await world.person("supervisor");
  const [escalated, assigned] = await open(2);
  await claim(mira, escalated);
  await escalateCase(world.ctx(mira), { id: escalated as string, note: "Too large for me" });
  await assign(sora, escalated);
  await claim(sora, escalated);
  await assign(sora, assigned);
  const ordinary = await rowOf(assigned);
  await giveRoles(sora, "reviewer");
  expect(await rowOf(escalated)).toMatchObject({ state: "escalated", assignedTo: null, claimedBy: null });
  expect(await rowOf(assigned)).toEqual(ordinary);
  const [entry] = await freedEntries(escalated);
  expect(JSON.parse(entry?.facts as string)).toMatchObject({
    assignedFrom: sora.personId,
    claimEndedOf: sora.personId,
  });
  await giveRoles(sora, "risk_manager");
  expect(await rowOf(assigned)).toMatchObject({ state: "open", assignedTo: null });
});

test("a further role changes nothing about the cases in hand", async () => {
  const mira = await world.person("reviewer");
  const [id] = await open(1);
  await claim(mira, id);
  const before = await rowOf(id);
  await giveRoles(mira, "reviewer", "supervisor");
  expect(await rowOf(id)).toEqual(before);
});

test("a case that reached somebody in the moment they were deactivated is freed by the next sweep, once", async () => {
  const mira = await world.person("reviewer");
  const [id, other] = await open(2);
  const nora = await world.person("reviewer");
  await assign(mira, id);
  await assign(nora, other);
  await world.db.update(people).set({ state: "deactivated" }).where(eq(people.id, mira.personId));
  const second = createDatabase(world.url, 4);
  try {
    await Promise.all([
      freeStrandedCases(job(), signal),
      freeStrandedCases({ ...job(), db: second.db }, signal),
    ]);
  } finally {
    await second.close();
  }
  expect(await rowOf(id)).toMatchObject({ state: "open", assignedTo: null, revision: 3 });
  expect(await rowOf(other)).toMatchObject({ assignedTo: nora.personId, revision: 2 });
  expect(await freedEntries(id)).toHaveLength(1);
});

test("somebody who decides while they are deactivated and the deactivation both come to an end", async () => {
  for (let round = 0; round < 5; round++) {
    const mira = await world.person("reviewer");
    const ids = await open(3);
    for (const id of ids) await claim(mira, id);
    const answers = await Promise.allSettled([
      ...ids.map((id) =>
        decideCase(world.ctx(mira), {
          id,
          verdict: "legitimate",
          typology: null,
          confidence: "sure",
          seenVersion: 2,
          scoreWasHidden: false,
          together: [],
        }),
      ),
      deactivate(mira),
    ]);
    expect(answers.at(-1)?.status).toBe("fulfilled");
    for (const [index, id] of ids.entries()) {
      const isDecided = answers[index]?.status === "fulfilled";
      expect(await rowOf(id)).toMatchObject({ state: isDecided ? "decided" : "open" });
    }
  }
});
