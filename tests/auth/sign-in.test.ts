import { eq } from "drizzle-orm";
import { expect, test } from "vitest";
import { people } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import { hashPassword, verifyPassword } from "@/lib/auth/password";
import { findPersonForSession } from "@/lib/auth/read";
import { SignInInput } from "@/lib/auth/schema";
import { signIn } from "@/lib/auth/sign-in";
import { signOut } from "@/lib/auth/sign-out";
import { newId } from "@/lib/new-id";
import { testDatabase } from "../support/database";
import { contextOf, makePerson, TEST_PASSWORD } from "../support/people";

const { db } = await testDatabase();
const NOON = Date.UTC(2026, 10, 2, 12);
const at = (minutes: number) => contextOf(db, { kind: "anonymous" }, () => new Date(NOON + minutes * 60_000));
const enter = (email: string, password: string, newPassword?: string, minutes = 0) =>
  signIn(at(minutes), SignInInput.parse({ email, password, ...(newPassword && { newPassword }) }), "origin");
const REFUSED = { signedIn: false, refusal: "refused" };

const entriesAbout = async (personId: string) =>
  (await db.select().from(trail).where(eq(trail.subjectId, personId))).map(({ act, actorKind, facts }) => ({
    act,
    actorKind,
    facts: JSON.parse(facts) as unknown,
  }));

test("the right password signs in, whatever the case of the address, and leaves an entry", async () => {
  const { personId, email } = await makePerson(db, ["reviewer"]);
  expect(await enter(` ${email.toUpperCase()} `, TEST_PASSWORD)).toEqual({
    signedIn: true,
    personId,
    sessionVersion: 1,
  });
  expect(await entriesAbout(personId)).toEqual([
    { act: "person.signed_in", actorKind: "person", facts: { origin: "origin" } },
  ]);
});

test("a wrong password, an unknown address and a deactivated account get one and the same answer", async () => {
  const active = await makePerson(db, ["reviewer"]);
  const closed = await makePerson(db, ["reviewer"], { state: "deactivated" });
  expect(await enter(active.email, "not this one at all")).toEqual(REFUSED);
  expect(await enter("nobody@cupel.test", TEST_PASSWORD)).toEqual(REFUSED);
  expect(await enter(closed.email, TEST_PASSWORD)).toEqual(REFUSED);
  expect(await entriesAbout(active.personId)).toEqual([
    {
      act: "person.sign_in_refused",
      actorKind: "anonymous",
      facts: { origin: "origin", reason: "password" },
    },
  ]);
  expect(await entriesAbout("unknown")).toEqual([
    {
      act: "person.sign_in_refused",
      actorKind: "anonymous",
      facts: { origin: "origin", reason: "unknown" },
    },
  ]);
});

test("an unknown address costs a whole Argon2id verification, as a known one does", async () => {
  expect(await hashPassword("x")).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
  // Without a stored hash the password is still verified, against one that nothing matches.
  expect(await verifyPassword(null, TEST_PASSWORD)).toBe(false);
});

test("ten failures lock the account for thirty minutes, also against the right password", async () => {
  const { personId, email } = await makePerson(db, ["reviewer"]);
  for (let n = 1; n <= 9; n++) await enter(email, "not this one at all");
  expect((await enter(email, TEST_PASSWORD)).signedIn).toBe(true);

  for (let n = 1; n <= 10; n++) await enter(email, "not this one at all");
  expect(await enter(email, TEST_PASSWORD)).toEqual(REFUSED);
  expect(await enter(email, TEST_PASSWORD, undefined, 29)).toEqual(REFUSED);
  expect((await enter(email, TEST_PASSWORD, undefined, 31)).signedIn).toBe(true);

  const acts = (await entriesAbout(personId)).map((entry) => entry.act);
  expect(acts.filter((act) => act === "person.locked")).toHaveLength(1);
  expect(acts.filter((act) => act === "person.sign_in_refused")).toHaveLength(9 + 10 + 2);
});

test("guesses sent at the same moment share the ten attempts", async () => {
  const { personId, email } = await makePerson(db, ["reviewer"]);
  await Promise.all(Array.from({ length: 25 }, () => enter(email, "not this one at all")));
  const reasons = (await entriesAbout(personId)).flatMap(({ act, facts }) =>
    act === "person.sign_in_refused" ? (facts as { reason: string }).reason : [],
  );
  expect(reasons.filter((reason) => reason === "password")).toHaveLength(10);
  expect(reasons.filter((reason) => reason === "locked")).toHaveLength(15);
});

test("a lock that has run out gives ten new attempts", async () => {
  const { email } = await makePerson(db, ["reviewer"]);
  for (let n = 1; n <= 10; n++) await enter(email, "not this one at all");
  for (let n = 1; n <= 9; n++) await enter(email, "not this one at all", undefined, 40);
  expect((await enter(email, TEST_PASSWORD, undefined, 40)).signedIn).toBe(true);
});

test("a one-time password opens only the way to a password of one's own, and only once", async () => {
  const { personId, email } = await makePerson(db, ["reviewer"], { passwordIsOneTime: 1 });
  expect(await enter(email, TEST_PASSWORD)).toEqual({ signedIn: false, refusal: "new_password_needed" });
  expect(await enter(email, TEST_PASSWORD, TEST_PASSWORD)).toMatchObject({
    refusal: "new_password_refused",
    detail: "must differ from the one-time password",
  });
  expect(await enter(email, TEST_PASSWORD, "too short")).toMatchObject({ refusal: "new_password_refused" });

  const mine = "my own brass weights";
  expect(await enter(email, TEST_PASSWORD, mine)).toEqual({ signedIn: true, personId, sessionVersion: 2 });
  expect(await enter(email, TEST_PASSWORD, "another good password")).toEqual(REFUSED);
  expect((await enter(email, mine)).signedIn).toBe(true);
  expect((await entriesAbout(personId)).map((entry) => entry.act)).toEqual([
    "person.password_changed",
    "person.signed_in",
    "person.sign_in_refused",
    "person.signed_in",
  ]);
});

test("one new password wins when a one-time password is used twice at once", async () => {
  const { email } = await makePerson(db, ["reviewer"], { passwordIsOneTime: 1 });
  const answers = await Promise.all([
    enter(email, TEST_PASSWORD, "the first brass weight"),
    enter(email, TEST_PASSWORD, "the second brass weight"),
  ]);
  expect(answers.filter((answer) => answer.signedIn)).toHaveLength(1);
});

test("a session stands until it is signed out of, its version is raised or the account is closed", async () => {
  const { personId } = await makePerson(db, ["supervisor"]);
  const claims = {
    sub: personId,
    sid: newId(),
    sessionVersion: 1,
    signedInAt: NOON / 1000,
  };
  const other = { ...claims, sid: newId() };
  expect(await findPersonForSession(db, claims)).toMatchObject({ personId, roles: ["supervisor"] });

  await signOut(at(1), claims);
  expect(await findPersonForSession(db, claims)).toBeNull();
  expect(await findPersonForSession(db, other)).not.toBeNull();
  await signOut(at(2), claims);
  expect((await entriesAbout(personId)).map((entry) => entry.act)).toEqual(["person.signed_out"]);

  await db.update(people).set({ sessionVersion: 2 }).where(eq(people.id, personId));
  expect(await findPersonForSession(db, other)).toBeNull();
  expect(await findPersonForSession(db, { ...other, sessionVersion: 2 })).not.toBeNull();
  await db.update(people).set({ state: "deactivated" }).where(eq(people.id, personId));
  expect(await findPersonForSession(db, { ...other, sessionVersion: 2 })).toBeNull();
});
