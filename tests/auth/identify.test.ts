import { eq } from "drizzle-orm";
import { encode } from "next-auth/jwt";
import { afterAll, expect, test, vi } from "vitest";
import { people, personRoles } from "@/db/schema/people";
import { identify, identifySession } from "@/lib/auth/identify";
import { IDLE_SECONDS, LONGEST_SECONDS } from "@/lib/auth/session";
import type { PersonActor } from "@/lib/context";
import { newId } from "@/lib/new-id";
import { testDatabase } from "../support/database";
import { makePerson } from "../support/people";

const SECRET = "a secret of the tests, long enough";
const { db, url } = await testDatabase();
vi.stubEnv("DATABASE_URL", url);
vi.stubEnv("SMTP_URL", "smtp://127.0.0.1:1");
vi.stubEnv("AUTH_SECRET", SECRET);
vi.stubEnv("APP_URL", "http://cupel.test");
afterAll(() => vi.unstubAllEnvs());

const nowSeconds = () => Math.floor(Date.now() / 1000);
const claimsOf = (person: PersonActor) => ({
  sub: person.personId,
  sid: newId(),
  sessionVersion: 1,
  signedInAt: nowSeconds(),
});

async function ask(token: Record<string, unknown>, { maxAge = IDLE_SECONDS, secret = SECRET } = {}) {
  const cookie = `cupel.session=${await encode({ token, secret, maxAge })}`;
  return identifySession("http://cupel.test/api", new Headers({ Cookie: cookie }), db, new Date());
}
const REFUSED = { code: "unauthenticated" };

test("a session's token names the person, and their roles are those of this moment", async () => {
  const person = await makePerson(db, ["reviewer"]);
  const claims = claimsOf(person);
  expect(await ask(claims)).toMatchObject({ personId: person.personId, roles: ["reviewer"], key: null });
  const added = { personId: person.personId, role: "supervisor" as const, grantedAt: new Date() };
  await db.insert(personRoles).values(added);
  expect((await ask(claims)).roles.toSorted()).toEqual(["reviewer", "supervisor"]);
});

test("a token that was not renewed for fifteen minutes is no session", async () => {
  const claims = claimsOf(await makePerson(db, ["reviewer"]));
  // The library that reads tokens forgives clocks that differ by fifteen seconds.
  await expect(ask(claims, { maxAge: -16 })).rejects.toMatchObject(REFUSED);
});

test("a token renewed for twelve hours on end is no session either", async () => {
  const claims = claimsOf(await makePerson(db, ["reviewer"]));
  await expect(ask({ ...claims, signedInAt: nowSeconds() - LONGEST_SECONDS })).rejects.toMatchObject(REFUSED);
  await expect(ask({ ...claims, signedInAt: nowSeconds() - LONGEST_SECONDS + 60 })).resolves.toBeDefined();
});

test("tokens of another secret, of an older version, of nobody and of half a claim are refused", async () => {
  const person = await makePerson(db, ["reviewer"]);
  const claims = claimsOf(person);
  await expect(ask(claims, { secret: "another secret, as long as it" })).rejects.toMatchObject(REFUSED);
  await expect(ask({ ...claims, sessionVersion: 0 })).rejects.toMatchObject(REFUSED);
  await expect(ask({ ...claims, sub: newId() })).rejects.toMatchObject(REFUSED);
  await expect(ask({ sub: person.personId, sessionVersion: 1 })).rejects.toMatchObject(REFUSED);
  await db.update(people).set({ sessionVersion: 2 }).where(eq(people.id, person.personId));
  await expect(ask(claims)).rejects.toMatchObject(REFUSED);
});

test.each(["Basic abc", "Bearer", "Bearer ", "Bearer a b", "bearer x", "Bearer é"])(
  "the header %j is refused, whatever cookie comes with it",
  async (header) => {
    const cookie = await encode({
      token: claimsOf(await makePerson(db, ["reviewer"])),
      secret: SECRET,
      maxAge: IDLE_SECONDS,
    });
    const headers = new Headers({ Authorization: header, Cookie: `cupel.session=${cookie}` });
    await expect(identify("http://cupel.test/api", headers, db, new Date())).rejects.toMatchObject(REFUSED);
  },
);
