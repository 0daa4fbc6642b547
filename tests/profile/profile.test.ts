import { eq } from "drizzle-orm";
import { expect, test } from "vitest";
import { people } from "@/db/schema/people";
import { trail } from "@/db/schema/trail";
import { signIn } from "@/lib/auth/sign-in";
import { changePassword } from "@/lib/profile/change-password";
import { readProfile } from "@/lib/profile/read";
import { SetTimeZoneInput } from "@/lib/profile/schema";
import { setTimeZone } from "@/lib/profile/set-time-zone";
import { testDatabase } from "../support/database";
import { contextOf, makePerson, TEST_PASSWORD } from "../support/people";

const { db } = await testDatabase();
const MINE = "nine brass weights in a row";

test("a changed password counts at once, ends every session and leaves an entry", async () => {
  const person = await makePerson(db, ["auditor"]);
  const ctx = contextOf(db, person);
  await changePassword(ctx, { currentPassword: TEST_PASSWORD, newPassword: MINE });
  const stranger = contextOf(db, { kind: "anonymous" });
  const enter = (password: string) => signIn(stranger, { email: person.email, password }, "o");
  expect(await enter(TEST_PASSWORD)).toMatchObject({ signedIn: false });
  expect(await enter(MINE)).toMatchObject({ signedIn: true, sessionVersion: 2 });
  const acts = await db.select({ act: trail.act }).from(trail).where(eq(trail.subjectId, person.personId));
  expect(acts.map(({ act }) => act)).toEqual([
    "person.password_changed",
    "person.sign_in_refused",
    "person.signed_in",
  ]);
});

test("the current password is asked for, and wrong ones lock the account like wrong sign-ins", async () => {
  const person = await makePerson(db, ["auditor"]);
  const ctx = contextOf(db, person);
  for (let n = 1; n <= 10; n++) {
    await expect(
      changePassword(ctx, { currentPassword: "not this one at all", newPassword: MINE }),
    ).rejects.toMatchObject({ code: "invalid", errors: [{ path: "currentPassword" }] });
  }
  await expect(
    changePassword(ctx, { currentPassword: TEST_PASSWORD, newPassword: MINE }),
  ).rejects.toMatchObject({ errors: [{ path: "currentPassword" }] });
});

test("a new password that cannot be taken changes nothing, and says why by its field", async () => {
  const person = await makePerson(db, ["auditor"]);
  const ctx = contextOf(db, person);
  for (const newPassword of ["short", "passwordpassword", TEST_PASSWORD]) {
    await expect(changePassword(ctx, { currentPassword: TEST_PASSWORD, newPassword })).rejects.toMatchObject({
      code: "invalid",
      errors: [{ path: "newPassword" }],
    });
  }
  const [row] = await db.select().from(people).where(eq(people.id, person.personId));
  expect(row).toMatchObject({ sessionVersion: 1, failedSignIns: 0, lockedUntil: null });
});

test("one's own time zone is a known one, and shows in the profile", async () => {
  const ctx = contextOf(db, await makePerson(db, ["reviewer"]));
  expect((await setTimeZone(ctx, SetTimeZoneInput.parse({ timeZone: "Asia/Kathmandu" }))).timeZone).toBe(
    "Asia/Kathmandu",
  );
  expect(await readProfile(ctx)).toMatchObject({ timeZone: "Asia/Kathmandu", roles: ["reviewer"] });
  for (const timeZone of ["Asia/Katmandu", "UTC", "America/Argentina/Ushuaia"]) {
    expect(SetTimeZoneInput.safeParse({ timeZone }).success).toBe(true);
  }
  for (const timeZone of ["Middle/Earth", "+02:00", ""]) {
    expect(SetTimeZoneInput.safeParse({ timeZone }).success).toBe(false);
  }
});
