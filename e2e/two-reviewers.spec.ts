import { DeskPage, type InHand } from "./pages/desk";
import { press } from "./pages/keyboard";
import { alertOn } from "./pages/text";
import { suspiciousPayments } from "./support/payments";
import { findDecision, readDraft } from "./support/records";
import { expect, test } from "./support/test";

test("two reviewers who work at the same time never have the same case", async ({ db, office, openAs }) => {
  const people = [await office.person("reviewer"), await office.person("reviewer")];
  await office.openCases([...suspiciousPayments(3), ...suspiciousPayments(3)]);
  const pages = await Promise.all(people.map((person) => openAs(person)));
  const seen = await Promise.all(
    pages.map(async (page) => {
      const desk = new DeskPage(page);
      const had: InHand[] = [await desk.open()];
      for (let count = 0; count < 3; count++) {
        await press(page, "ArrowLeft");
        had.push(await desk.commit(had.at(-1) as InHand));
      }
      await expect(page.getByText(/on the way/)).toHaveCount(0);
      return had.map(({ caseId }) => caseId);
    }),
  );
  const all = seen.flat();
  expect(new Set(all).size).toBe(all.length);
  for (const [index, caseIds] of seen.entries()) {
    for (const caseId of caseIds.slice(0, 3)) {
      expect(await findDecision(db, caseId)).toMatchObject({ personId: people[index]?.personId });
    }
  }
});

test("what one decides shows at the other at once, and nothing moves under the pointer", async ({
  office,
  openAs,
}) => {
  const [one, other] = [await office.person("reviewer"), await office.person("reviewer")];
  const mine = await openAs(one);
  const desk = new DeskPage(mine);
  const hand = await desk.open();
  const theirs = await openAs(other);
  const watcher = new DeskPage(theirs);
  await watcher.open();
  await expect(theirs.getByText("Live", { exact: true })).toBeVisible();
  await watcher.list.hover();
  // Far down a long list the row is not drawn; the one who watches scrolls to it.
  await watcher.scrollTo(hand.number);
  await expect(watcher.row(hand.number)).toContainText(one.name);
  const before = await watcher.shownNumbers();

  await press(mine, "ArrowLeft", "ArrowLeft");
  await desk.commit(hand);
  await expect(watcher.row(hand.number)).toContainText("decided");
  await expect(theirs.getByText("Order changed")).toBeVisible();
  expect(await watcher.shownNumbers()).toEqual(before);

  await theirs.getByRole("button", { name: "Show it" }).click();
  await expect(watcher.row(hand.number)).toHaveCount(0);
});

test.describe("when a case is taken away meanwhile", () => {
  const note = "Customer reached on the number on file: not made by them.";

  test("a verdict that comes too late is refused in plain words, with the note", async ({
    db,
    office,
    openAs,
    complaints,
  }) => {
    complaints.expectStatus(409);
    const person = await office.person("reviewer");
    const [opened] = await office.openCases(suspiciousPayments(1), person);
    if (!opened) throw new Error("A case was opened");
    const page = await openAs(person);
    const desk = new DeskPage(page);
    // Without live updates, so that the Desk has not heard of it when Enter is pressed.
    await page.route("/api/queue/events", (route) => route.abort());
    complaints.expect(/net::ERR_FAILED/);
    const hand = await desk.open(opened.caseId);
    await press(page, "f");
    await page.keyboard.type(note);
    await press(page, "Escape", "ArrowRight", "1");
    await office.assign([opened], null);
    await office.decide(opened, "legitimate");
    await desk.settle();
    await press(page, "Enter");

    const refusal = alertOn(page).filter({ hasText: `Case ${opened.number} is not decided` });
    await expect(refusal).toContainText("Somebody has decided this case already");
    await expect(refusal).toContainText(note);
    await desk.nextAfter(hand);
    expect(await findDecision(db, opened.caseId)).toMatchObject({ verdict: "legitimate" });
    await refusal.getByRole("button", { name: "Seen" }).click();
    await expect(refusal).toHaveCount(0);
  });

  test("a case that is still free comes back to hand, and the note with it", async ({
    db,
    office,
    openAs,
    complaints,
  }) => {
    complaints.expectStatus(409);
    const person = await office.person("reviewer");
    const [opened] = await office.openCases(suspiciousPayments(1), person);
    if (!opened) throw new Error("A case was opened");
    const page = await openAs(person);
    const desk = new DeskPage(page);
    await page.route("/api/queue/events", (route) => route.abort());
    complaints.expect(/net::ERR_FAILED/);
    await desk.open(opened.caseId);
    await press(page, "f");
    await page.keyboard.type(note);
    await press(page, "Escape", "ArrowLeft");
    await office.asSupervisor(`/api/floor/release`, { caseIds: [opened.caseId] });
    await desk.settle();
    await press(page, "Enter");
    await expect(desk.status).toContainText(`Case ${opened.number} is not decided legitimate, unsure`);
    await expect(desk.status).toContainText("It is back in hand.");
    await desk.backInHand(opened);
    await expect(desk.note).toHaveValue(note);
    expect(await findDecision(db, opened.caseId)).toBeNull();
  });

  test("the Desk says so as soon as it hears of it, and what was typed is not lost", async ({
    db,
    office,
    openAs,
    complaints,
  }) => {
    complaints.expectStatus(403, 409);
    const [person, another] = [await office.person("reviewer"), await office.person("reviewer")];
    const [opened] = await office.openCases(suspiciousPayments(1), person);
    if (!opened) throw new Error("A case was opened");
    const page = await openAs(person);
    const desk = new DeskPage(page);
    const hand = await desk.open(opened.caseId);
    await expect(page.getByText("Live", { exact: true })).toBeVisible();
    await press(page, "f");
    await page.keyboard.type(note);
    await expect.poll(() => readDraft(db, opened.caseId)).toBe(note);
    await office.assign([opened], another);
    await expect(desk.status).toContainText(`Case ${opened.number} is no longer in your hands`);
    await expect(desk.note).toBeFocused();
    await expect(desk.note).toHaveValue(note);
    await press(page, "Escape", "ArrowLeft");
    await desk.settle();
    await press(page, "Enter");
    await expect(desk.status).toContainText("No longer in your hands.");
    expect(await findDecision(db, opened.caseId)).toBeNull();
    await press(page, "e");
    await desk.nextAfter(hand);
    expect(await readDraft(db, opened.caseId)).toBe(note);
  });
});
