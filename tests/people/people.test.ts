import { eq } from "drizzle-orm";
import { expect, test, vi } from "vitest";
import { idempotencyKeys, people, personRoles } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import { signIn } from "@/lib/auth/sign-in";
import type { Context } from "@/lib/context";
import { newId } from "@/lib/new-id";
import { addPerson } from "@/lib/people/add";
import { ensureFirstAdministrator } from "@/lib/people/first-administrator";
import { listPeople } from "@/lib/people/read";
import { resetPassword } from "@/lib/people/reset-password";
import { AddPersonInput } from "@/lib/people/schema";
import { setRoles } from "@/lib/people/set-roles";
import { deactivatePerson, reactivatePerson } from "@/lib/people/set-state";
import { ReplayedAnswer } from "@/lib/write-once";
import { testDatabase } from "../support/database";
import { contextOf, makePerson } from "../support/people";

const { db, url } = await testDatabase();
const administrator = await makePerson(db, ["administrator"]);
const ctx = contextOf(db, administrator);
const input = (more: Record<string, unknown> = {}) =>
  AddPersonInput.parse({ email: `${newId()}@cupel.test`, name: "Nora New", roles: ["reviewer"], ...more });

const sessionVersionOf = async (id: string) => {
  const [row] = await db.select({ v: people.sessionVersion }).from(people).where(eq(people.id, id));
  return row?.v;
};
const actsAbout = async (id: string) =>
  (await db.select().from(trail).where(eq(trail.subjectId, id))).map((entry) => entry.act);

test("a new person signs in with the one-time password and a password of their own", async () => {
  const given = input({ roles: ["reviewer", "supervisor"], timeZone: "Europe/Oslo" });
  const { person, oneTimePassword } = await addPerson(ctx, given);
  expect(person).toMatchObject({
    email: given.email,
    roles: ["reviewer", "supervisor"],
    state: "active",
    passwordIsOneTime: true,
    timeZone: "Europe/Oslo",
  });
  expect(oneTimePassword).toMatch(/^[a-z2-9]{5}(-[a-z2-9]{5}){3}$/);
  const stranger = contextOf(db, { kind: "anonymous" });
  const password = oneTimePassword ?? "";
  const first = await signIn(stranger, { email: given.email, password }, "o");
  expect(first).toMatchObject({ refusal: "new_password_needed" });
  const newPassword = "seven brass weights";
  const second = await signIn(stranger, { email: given.email, password, newPassword }, "o");
  expect(second).toMatchObject({ signedIn: true, personId: person.id });
  expect(await actsAbout(person.id)).toEqual(["person.added", "person.password_changed", "person.signed_in"]);
});

test("the one-time password is in the first answer and nowhere else", async () => {
  const keyed: Context = { ...ctx, idempotency: { key: newId(), requestHash: Buffer.alloc(32, 1) } };
  const given = input();
  const { person, oneTimePassword } = await addPerson(keyed, given);
  const again = await addPerson(keyed, given).catch((error: unknown) => error);
  expect(again).toBeInstanceOf(ReplayedAnswer);
  expect((again as ReplayedAnswer).answer).toEqual({ person, oneTimePassword: null });
  const kept = JSON.stringify([
    await db.select().from(idempotencyKeys),
    await db.select().from(people),
    await db.select({ facts: trail.facts }).from(trail),
  ]);
  expect(kept).toContain(person.id);
  expect(kept).not.toContain(oneTimePassword);
});

test("an address belongs to one person, whatever its case", async () => {
  const given = input();
  await addPerson(ctx, given);
  await expect(addPerson(ctx, input({ email: given.email.toUpperCase() }))).rejects.toMatchObject({
    code: "conflict",
    errors: [{ path: "email" }],
  });
});

test("auditor and administrator combine with no other role, neither at the start nor later", async () => {
  await expect(addPerson(ctx, input({ roles: ["auditor", "reviewer"] }))).rejects.toMatchObject({
    code: "invalid",
    errors: [{ path: "roles" }],
  });
  const { person } = await addPerson(ctx, input());
  await expect(setRoles(ctx, { id: person.id, roles: ["reviewer", "administrator"] })).rejects.toMatchObject({
    errors: [{ path: "roles" }],
  });
  expect((await setRoles(ctx, { id: person.id, roles: ["auditor"] })).roles).toEqual(["auditor"]);
});

test("changes of roles, state and password each end the person's sessions", async () => {
  const { person } = await addPerson(ctx, input());
  const { id } = person;
  expect(await sessionVersionOf(id)).toBe(1);
  await setRoles(ctx, { id, roles: ["supervisor"] });
  expect(await sessionVersionOf(id)).toBe(2);
  await deactivatePerson(ctx, { id });
  expect(await sessionVersionOf(id)).toBe(3);
  await reactivatePerson(ctx, { id });
  expect(await sessionVersionOf(id)).toBe(4);
  await resetPassword(ctx, { id });
  expect(await sessionVersionOf(id)).toBe(5);
  expect(await actsAbout(id)).toEqual([
    "person.added",
    "person.roles_changed",
    "person.deactivated",
    "person.reactivated",
    "person.password_reset",
  ]);
});

test("what is as asked already changes nothing and writes nothing", async () => {
  const { person } = await addPerson(ctx, input());
  await setRoles(ctx, { id: person.id, roles: ["reviewer"] });
  await reactivatePerson(ctx, { id: person.id });
  expect(await actsAbout(person.id)).toEqual(["person.added"]);
  expect(await sessionVersionOf(person.id)).toBe(1);
});

test("a reset unlocks the account and replaces the password", async () => {
  const locked = await makePerson(db, ["reviewer"], {
    failedSignIns: 10,
    lockedUntil: new Date(Date.now() + 60_000),
  });
  const { person, oneTimePassword } = await resetPassword(ctx, { id: locked.personId });
  expect(person).toMatchObject({ lockedUntil: null, passwordIsOneTime: true });
  expect(oneTimePassword).toHaveLength(23);
});

test("the list is searched by name and address, and filtered by role and state", async () => {
  const { person } = await addPerson(ctx, input({ name: "Ångström 100% _sure_", roles: ["risk_manager"] }));
  const names = async (filters: Parameters<typeof listPeople>[1]) =>
    (await listPeople(ctx, filters)).items.map((item) => item.name);
  expect(await names({ search: "ångSTRÖM" })).toEqual([person.name]);
  expect(await names({ search: "100% _" })).toEqual([person.name]);
  expect(await names({ search: "%" })).toEqual([person.name]);
  expect(await names({ search: person.email.slice(0, 36).toUpperCase() })).toEqual([person.name]);
  expect(await names({ role: "risk_manager", state: "active" })).toEqual([person.name]);
  expect(await names({ role: "risk_manager", state: "deactivated" })).toEqual([]);
});

test("auditors read the list and change nothing; reviewers do neither", async () => {
  const auditor = contextOf(db, await makePerson(db, ["auditor"]));
  const reviewer = contextOf(db, await makePerson(db, ["reviewer"]));
  expect((await listPeople(auditor, {})).items.length).toBeGreaterThan(0);
  await expect(listPeople(reviewer, {})).rejects.toMatchObject({ code: "forbidden" });
  for (const other of [auditor, reviewer]) {
    const id = administrator.personId;
    await expect(addPerson(other, input())).rejects.toMatchObject({ code: "forbidden" });
    await expect(setRoles(other, { id, roles: ["reviewer"] })).rejects.toMatchObject({ code: "forbidden" });
    await expect(deactivatePerson(other, { id })).rejects.toMatchObject({ code: "forbidden" });
    await expect(resetPassword(other, { id })).rejects.toMatchObject({ code: "forbidden" });
  }
});

test("the last active administrator can be neither deactivated nor given another role", async () => {
  await makePerson(db, ["administrator"], { state: "deactivated" });
  const { personId: id } = administrator;
  await expect(deactivatePerson(ctx, { id })).rejects.toMatchObject({ code: "rule_broken" });
  await expect(setRoles(ctx, { id, roles: ["reviewer"] })).rejects.toMatchObject({
    code: "rule_broken",
    errors: [{ path: "roles" }],
  });
  expect(await sessionVersionOf(id)).toBe(1);
});

test("administrators who remove each other at the same moment leave one", async () => {
  for (let round = 0; round < 10; round++) {
    const a = await makePerson(db, ["administrator"]);
    const b = await makePerson(db, ["administrator"]);
    await db.update(people).set({ state: "deactivated" }).where(eq(people.id, administrator.personId));
    const answers = await Promise.allSettled([
      setRoles(contextOf(db, a), { id: b.personId, roles: ["reviewer"] }),
      deactivatePerson(contextOf(db, b), { id: a.personId }),
    ]);
    expect(answers.filter((answer) => answer.status === "fulfilled")).toHaveLength(1);
    const left = await db
      .select({ id: people.id, state: people.state })
      .from(people)
      .innerJoin(personRoles, eq(personRoles.personId, people.id))
      .where(eq(personRoles.role, "administrator"));
    expect(left.filter(({ state }) => state === "active")).toHaveLength(1);
    await db.update(people).set({ state: "active" }).where(eq(people.id, administrator.personId));
    for (const { personId } of [a, b]) {
      await db.update(people).set({ state: "deactivated" }).where(eq(people.id, personId));
    }
  }
});

test("the first administrator is made once, on an empty installation, and with a password worth having", async () => {
  const empty = await testDatabase();
  vi.stubEnv("DATABASE_URL", url);
  vi.stubEnv("SMTP_URL", "smtp://127.0.0.1:1");
  vi.stubEnv("AUTH_SECRET", "s".repeat(32));
  vi.stubEnv("CUPEL_ADMIN_EMAIL", "Root@Cupel.test");
  vi.stubEnv("CUPEL_ADMIN_PASSWORD", "four small brass weights");
  const start = contextOf(empty.db, { kind: "system", job: "start" });
  await Promise.all([ensureFirstAdministrator(start), ensureFirstAdministrator(start)]);
  await ensureFirstAdministrator(start);
  const everybody = await empty.db.select().from(people);
  expect(everybody).toHaveLength(1);
  expect(everybody[0]).toMatchObject({ email: "root@cupel.test", passwordIsOneTime: 0 });
  const entries = await empty.db.select().from(trail);
  expect(entries.map(({ act, actorId }) => [act, actorId])).toEqual([["person.added", "start"]]);
  await ensureFirstAdministrator(ctx);
  expect(await db.select().from(people).where(eq(people.email, "root@cupel.test"))).toEqual([]);
  vi.unstubAllEnvs();
});
