import { eq, sql } from "drizzle-orm";
import { people } from "@/db/schema/people";
import type { Role } from "@/lib/auth/codes";
import { makePerson, TEST_PASSWORD } from "@/tests/support/people";
import { DeskPage } from "./pages/desk";
import { press } from "./pages/keyboard";
import { menuLinks, SignInPage } from "./pages/sign-in";
import { alertOn } from "./pages/text";
import { demoPerson } from "./support/demo";
import { suspiciousPayments } from "./support/payments";
import { countHeld, findDecision } from "./support/records";
import { expect, test } from "./support/test";

const WORDS: Record<Role, string> = {
  reviewer: "Reviewer",
  supervisor: "Supervisor",
  risk_manager: "Risk manager",
  auditor: "Auditor",
  administrator: "Administrator",
};

/** What each role's day consists of; the first of them is where it begins. */
const MENUS: Record<Role, { begins: string; offers: string[]; refuses: string }> = {
  reviewer: { begins: "/desk", offers: ["Desk", "Cases"], refuses: "/floor" },
  supervisor: {
    begins: "/floor",
    offers: ["Desk", "Cases", "Floor", "Policy", "Learning", "Signals", "Losses", "Trail", "Intake"],
    refuses: "/people",
  },
  risk_manager: {
    begins: "/losses",
    offers: ["Cases", "Policy", "Learning", "Signals", "Losses", "Trail"],
    refuses: "/desk",
  },
  auditor: {
    begins: "/trail",
    offers: ["Cases", "Policy", "Learning", "Signals", "Losses", "Trail", "Intake", "People"],
    refuses: "/desk",
  },
  administrator: { begins: "/people", offers: ["Intake", "People"], refuses: "/cases" },
};

for (const [role, { begins, offers, refuses }] of Object.entries(MENUS) as [Role, (typeof MENUS)[Role]][]) {
  test(`signs in from the start page as ${WORDS[role].toLowerCase()}, and finds that role's pages and no other`, async ({
    page,
    complaints,
  }) => {
    const { name } = demoPerson(role);
    await page.goto("/");
    await page.getByRole("button", { name: `${WORDS[role]}, ${name}` }).click();
    await expect(page).toHaveURL(begins);
    await expect(page.getByRole("banner").getByRole("link", { name, exact: true })).toBeVisible();
    await expect(menuLinks(page)).toHaveText(offers);
    for (const offered of offers) {
      await menuLinks(page).filter({ hasText: offered }).click();
      await expect(page.getByRole("heading", { level: 1 })).toHaveText(new RegExp(`^${offered}`));
    }
    complaints.expectStatus(403);
    await page.goto(refuses);
    await expect(page.getByRole("heading", { level: 1 })).toHaveText("Not among your roles");
    await page.getByRole("button", { name: "Sign out" }).click();
    await expect(page).toHaveURL("/sign-in");
    await page.goto(begins);
    await expect(page.getByRole("heading", { level: 1 })).toHaveText("Sign in");
  });
}

test("a wrong password and an unknown address are refused alike", async ({ page, office, complaints }) => {
  complaints.expectStatus(401);
  const { email } = await office.person("reviewer");
  const form = new SignInPage(page);
  await form.open();
  for (const address of [email, `nobody.${email}`]) {
    await form.enter(address, "quite another phrase");
    await expect(alertOn(page)).toHaveText(/E-mail and password do not fit together/);
    await expect(page).toHaveURL("/sign-in");
  }
  await form.enter(email, TEST_PASSWORD);
  await expect(page).toHaveURL("/desk");
});

test("a link that needs signing in leads on to where it pointed", async ({ page, office }) => {
  const { email } = await office.person("auditor");
  await page.goto("/trail?act=policy.approved");
  await new SignInPage(page).enter(email, TEST_PASSWORD);
  await expect(page).toHaveURL("/trail?act=policy.approved");
});

test("a one-time password opens nothing before a password of one's own is chosen", async ({
  page,
  db,
  complaints,
}) => {
  complaints.expectStatus(401);
  const { email } = await makePerson(db, ["auditor"], { passwordIsOneTime: 1 });
  const form = new SignInPage(page);
  const own = "slow barges carry the grain";
  await form.open();
  await form.enter(email, TEST_PASSWORD);
  await expect(page.getByText("This is a one-time password. Choose one of your own to go on.")).toBeVisible();

  await form.newPassword.fill("too short");
  await form.submit("Set the password and sign in");
  await expect(page.getByText(/^The new password .*15 characters/)).toBeVisible();

  await form.newPassword.fill(own);
  await form.submit("Set the password and sign in");
  await expect(page).toHaveURL("/trail");

  await page.getByRole("button", { name: "Sign out" }).click();
  await form.enter(email, TEST_PASSWORD);
  await expect(alertOn(page)).toHaveText(/do not fit together/);
  await form.enter(email, own);
  await expect(page).toHaveURL("/trail");
});

test("after fifteen idle minutes the password is asked for, and the note being written is still there", async ({
  office,
  openAs,
  complaints,
}) => {
  complaints.expectStatus(401);
  const person = await office.person("reviewer");
  await office.openCases(suspiciousPayments(2), person);
  const page = await openAs(person);
  await page.clock.install();
  const desk = new DeskPage(page);
  const hand = await desk.open();
  await press(page, "f");
  await page.keyboard.type("Rang twice, no ans");

  await page.clock.fastForward("14:50");
  await expect(desk.dialog).toHaveCount(0);
  await page.clock.fastForward("00:20");
  await expect(desk.dialog).toContainText(
    "Nothing was touched for 15 minutes. What you were writing is kept.",
  );
  await press(page, "Escape");
  await expect(desk.dialog).toBeVisible();

  const again = new SignInPage(page);
  await again.enter(person.email, "not the password at all", "Go on");
  await expect(alertOn(desk.dialog)).toHaveText(/do not fit together/);
  await again.enter(person.email, TEST_PASSWORD, "Go on");
  await expect(desk.dialog).toHaveCount(0);
  await expect(desk.note).toBeFocused();
  await page.keyboard.type("wer");
  await expect(desk.note).toHaveValue("Rang twice, no answer");
  await expect(desk.hand).toHaveAttribute("data-case-id", hand.caseId);
});

test("a session that has ended asks for the password, and then the verdict that was under way is given", async ({
  db,
  office,
  openAs,
  complaints,
}) => {
  complaints.expectStatus(401);
  const person = await office.person("reviewer");
  await office.openCases(suspiciousPayments(2), person);
  const page = await openAs(person);
  const desk = new DeskPage(page);
  const hand = await desk.open();
  // What the Desk fetches ahead has been handed out, so that nothing but the verdict is under way.
  await expect.poll(() => countHeld(db, person.personId)).toBe(2);
  await db
    .update(people)
    .set({ sessionVersion: sql`${people.sessionVersion} + 1` })
    .where(eq(people.id, person.personId));
  await press(page, "ArrowLeft");
  await desk.settle();
  await press(page, "Enter");
  await expect(desk.dialog).toContainText("Your session has ended. What you were writing is kept.");
  expect(await findDecision(db, hand.caseId)).toBeNull();
  await new SignInPage(page).enter(person.email, TEST_PASSWORD, "Go on");
  await expect(desk.dialog).toHaveCount(0);
  await expect(desk.status).toContainText(`Case ${hand.number} is decided legitimate, unsure.`);
  expect(await findDecision(db, hand.caseId)).toMatchObject({ personId: person.personId });
});
