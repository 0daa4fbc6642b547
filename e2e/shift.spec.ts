import { DeskPage } from "./pages/desk";
import { countPointerUse, press, tabTo } from "./pages/keyboard";
import { demoPerson } from "./support/demo";
import { suspiciousPayments } from "./support/payments";
import { findDecision, readCaseRow, readNotes } from "./support/records";
import { expect, test } from "./support/test";

/** Not the one who signs in elsewhere at the same time: two Desks of one person take up each other's cases. */
const reviewer = demoPerson("reviewer", 1);

test("a whole shift goes by keyboard alone, from the sign-in on", async ({ page, db, office }) => {
  test.setTimeout(120_000);
  const pointerUse = await countPointerUse(page);
  const desk = new DeskPage(page);
  const owner = { personId: reviewer.id };
  for (let account = 0; account < 4; account++) {
    await office.openCases(suspiciousPayments(2, "card_present"), owner);
  }

  await test.step("signs in from the start page", async () => {
    await page.goto("/");
    await tabTo(page.getByRole("button", { name: `Reviewer, ${reviewer.name}` }));
    await press(page, "Enter");
    await expect(page).toHaveURL("/desk");
  });
  let hand = await desk.inHand();

  await test.step("finds a case legitimate, unsure", async () => {
    await press(page, "ArrowLeft");
    await expect(desk.stop("Legitimate, unsure")).toBeChecked();
    const done = hand;
    hand = await desk.commit(done);
    await expect(desk.status).toContainText(`Case ${done.number} is decided legitimate, unsure.`);
    expect(await findDecision(db, done.caseId)).toMatchObject({
      personId: reviewer.id,
      verdict: "legitimate",
      confidence: "unsure",
      typology: null,
    });
  });

  await test.step("finds the next fraudulent, with its typology by digit", async () => {
    await desk.settle();
    await press(page, "ArrowRight", "ArrowRight", "Enter");
    await expect(desk.status).toContainText("Choose the typology first.");
    await press(page, "2");
    const typology = await page
      .getByRole("group", { name: "Typology" })
      .getByRole("radio")
      .nth(1)
      .inputValue();
    const done = hand;
    hand = await desk.commit(done);
    await expect(desk.status).toContainText(`Case ${done.number} is decided fraudulent, sure`);
    expect(await findDecision(db, done.caseId)).toMatchObject({
      verdict: "fraudulent",
      confidence: "sure",
      typology,
    });
  });

  await test.step("finds customer misuse by its own key, and leaves a note", async () => {
    await press(page, "m");
    await expect(desk.stop("Customer misuse, sure")).toBeChecked();
    await press(page, "f");
    await expect(desk.note).toBeFocused();
    await page.keyboard.type("Delivered and signed for, quite some time ago.");
    await press(page, "Escape");
    await expect(desk.heading).toBeFocused();
    await expect(desk.stop("Customer misuse, sure")).toBeChecked();
    const done = hand;
    hand = await desk.commit(done);
    await expect(desk.status).toContainText(`Case ${done.number} is decided customer misuse, sure.`);
    expect(await findDecision(db, done.caseId)).toMatchObject({ verdict: "customer_misuse", typology: null });
    expect(await readNotes(db, done.caseId)).toContain("Delivered and signed for, quite some time ago.");
  });

  await test.step("hides the score, and decides without it", async () => {
    await press(page, "s");
    await expect(page.getByText("Score hidden", { exact: true })).toBeVisible();
    await expect(page.getByRole("list", { name: /evidence is made of/ })).toHaveCount(0);
    await expect(page.getByText("What would change this")).toHaveCount(0);
    await press(page, "ArrowLeft", "ArrowLeft");
    const done = hand;
    hand = await desk.commit(done);
    await expect(desk.status).toContainText(`Case ${done.number} is decided legitimate, sure.`);
    expect(await findDecision(db, done.caseId)).toMatchObject({ scoreWasHidden: 1 });
    await press(page, "s");
    await expect(page.getByRole("list", { name: /evidence is made of/ })).toBeVisible();
    await expect(page.getByText("What would change this")).toBeVisible();
  });

  await test.step("takes the decision back and sees its case again", async () => {
    await press(page, "ArrowLeft");
    const done = hand;
    await desk.commit(done);
    await expect(desk.status).toContainText(`Case ${done.number} is decided legitimate, unsure.`);
    await press(page, "Control+z");
    await expect(desk.dialog).toContainText(`Take back the decision on case ${done.number}?`);
    await press(page, "Enter");
    hand = await desk.backInHand(done);
    expect(await findDecision(db, done.caseId)).toBeNull();
    expect(await readCaseRow(db, done.caseId)).toMatchObject({ state: "claimed", claimedBy: reviewer.id });
  });

  await test.step("puts a case back, and fetches it again", async () => {
    const before = hand;
    await press(page, "e");
    hand = await desk.nextAfter(before);
    await press(page, "w");
    hand = await desk.backInHand(before);
  });

  await test.step("escalates a case", async () => {
    const done = hand;
    await press(page, "q");
    await expect(desk.dialog).toContainText(`Escalate case ${done.number}`);
    await page.keyboard.type("Names a member of staff.");
    await press(page, "Enter");
    hand = await desk.nextAfter(done);
    await expect(desk.status).toContainText(`Case ${done.number} is escalated.`);
    expect(await readCaseRow(db, done.caseId)).toMatchObject({ state: "escalated", claimedBy: null });
    expect(await readNotes(db, done.caseId)).toContain("Names a member of staff.");
  });

  await test.step("decides what links to a case in the same act", async () => {
    const [first, second] = await office.openCases(suspiciousPayments(2), owner);
    if (!first || !second) throw new Error("Two cases were opened");
    hand = await desk.open(first.caseId);
    expect(hand.caseId).toBe(first.caseId);
    await press(page, "d");
    await expect(
      page.getByRole("checkbox", { name: `Decide Case ${second.number} together with this case` }),
    ).toBeFocused();
    await press(page, "Space", "Escape");
    await expect(desk.heading).toBeFocused();
    await press(page, "ArrowRight", "4");
    await expect(page.getByText("for 2 payments")).toBeVisible();
    hand = await desk.commit(hand);
    await expect(desk.status).toContainText(
      `Case ${first.number} is decided fraudulent, unsure: card details theft, with 1 other.`,
    );
    const [one, other] = [await findDecision(db, first.caseId), await findDecision(db, second.caseId)];
    expect(other).toMatchObject({ verdict: "fraudulent", typology: "details_theft", actId: one?.actId });
  });

  await test.step("sets a case aside until tomorrow", async () => {
    const [aside] = await office.openCases(suspiciousPayments(1, "card_present"), owner);
    if (!aside) throw new Error("A case was opened");
    hand = await desk.open(aside.caseId);
    await press(page, "a");
    await expect(desk.dialog).toContainText(`Set case ${aside.number} aside`);
    await tabTo(desk.dialog.getByRole("radio", { name: /1 hour/ }));
    await press(page, "ArrowDown");
    await tabTo(desk.dialog.getByRole("textbox", { name: "What it waits for" }));
    await page.keyboard.type("The customer calls back.");
    await press(page, "Enter");
    hand = await desk.nextAfter(hand);
    await expect(desk.status).toContainText(`Case ${aside.number} is set aside.`);
    expect(await readCaseRow(db, aside.caseId)).toMatchObject({ state: "waiting", assignedTo: reviewer.id });
  });

  await test.step("signs out", async () => {
    await tabTo(page.getByRole("button", { name: "Sign out" }), "Shift+Tab");
    await press(page, "Enter");
    await expect(page).toHaveURL("/sign-in");
  });
  expect(await pointerUse()).toBe(0);
});

test.describe("keys", () => {
  test("Enter is dead until a case has been there for 400 ms, and a key held down counts once", async ({
    db,
    office,
    openAs,
  }) => {
    const person = await office.person("reviewer");
    await office.openCases(suspiciousPayments(4), person);
    const page = await openAs(person);
    await page.clock.install();
    const desk = new DeskPage(page);
    const first = await desk.open();
    await expect(page.getByText("Live", { exact: true })).toBeVisible();

    await test.step("a key held down moves the marker by one stop", async () => {
      for (let count = 0; count < 4; count++) await page.keyboard.down("ArrowLeft");
      await page.keyboard.up("ArrowLeft");
      await expect(desk.stop("Legitimate, unsure")).toBeChecked();
    });

    await page.clock.pauseAt(await page.evaluate(() => Date.now() + 1_000));
    await press(page, "Enter");
    const second = await desk.nextAfter(first);

    await test.step("Enter does nothing yet", async () => {
      await press(page, "ArrowLeft");
      await page.clock.runFor(399);
      await press(page, "Enter");
      await expect(desk.stop("Legitimate, unsure")).toBeChecked();
      expect((await desk.inHand()).caseId).toBe(second.caseId);
    });

    await test.step("a finger still on Enter does nothing either", async () => {
      await page.keyboard.down("Enter");
      await page.clock.runFor(1);
      for (let count = 0; count < 4; count++) await page.keyboard.down("Enter");
      await page.keyboard.up("Enter");
      expect((await desk.inHand()).caseId).toBe(second.caseId);
      expect(await findDecision(db, second.caseId)).toBeNull();
    });

    await press(page, "Enter");
    await desk.nextAfter(second);
    await page.clock.resume();
    for (const { caseId } of [first, second]) {
      await expect.poll(() => findDecision(db, caseId)).toMatchObject({ verdict: "legitimate" });
    }
  });

  test("help lists them; each can be bound anew, and all switched off", async ({ db, office, openAs }) => {
    const person = await office.person("reviewer");
    await office.openCases(suspiciousPayments(3), person);
    const page = await openAs(person);
    const pointerUse = await countPointerUse(page);
    const desk = new DeskPage(page);
    const hand = await desk.open();

    await test.step("the note's key moves to another place", async () => {
      await press(page, "?");
      await expect(desk.dialog).toContainText("Shortcuts");
      await tabTo(desk.dialog.getByRole("button", { name: "Write a note: F. Press to change" }));
      await press(page, "Enter", "q");
      await expect(desk.dialog.getByRole("status")).toContainText(
        "Q is already bound: Escalate to a supervisor",
      );
      await press(page, "n");
      await expect(
        desk.dialog.getByRole("button", { name: "Write a note: N. Press to change" }),
      ).toBeFocused();
      await press(page, "Escape");
      await expect(desk.heading).toBeFocused();
      await press(page, "f");
      await expect(desk.heading).toBeFocused();
      await press(page, "n");
      await expect(desk.note).toBeFocused();
      await press(page, "Escape");
    });

    await test.step("a new page keeps it", async () => {
      await page.reload();
      await desk.inHand();
      await press(page, "n");
      await expect(desk.note).toBeFocused();
      await press(page, "Escape");
    });

    await test.step("switched off, single keys do nothing, and the others still do", async () => {
      await press(page, "?");
      await tabTo(desk.dialog.getByRole("checkbox", { name: "Single keys on" }));
      await press(page, "Space", "Escape");
      await expect(desk.heading).toBeFocused();
      await press(page, "n", "q", "m", "s");
      await expect(desk.heading).toBeFocused();
      await expect(desk.dialog).toHaveCount(0);
      await expect(desk.stop("No finding")).toBeChecked();
      await press(page, "ArrowLeft", "ArrowLeft");
      await desk.commit(hand);
      await expect(desk.status).toContainText(`Case ${hand.number} is decided legitimate, sure.`);
      expect(await findDecision(db, hand.caseId)).toMatchObject({
        verdict: "legitimate",
        confidence: "sure",
      });
    });
    expect(await pointerUse()).toBe(0);
  });

  test("single keys work only on the case: letters typed elsewhere stay letters", async ({
    office,
    openAs,
  }) => {
    const person = await office.person("reviewer");
    await office.openCases(suspiciousPayments(2), person);
    const page = await openAs(person);
    const desk = new DeskPage(page);
    await desk.open();
    await press(page, "f");
    await page.keyboard.type("qwerty, 1 2 3 and m?");
    await expect(desk.note).toHaveValue("qwerty, 1 2 3 and m?");
    await expect(desk.dialog).toHaveCount(0);
    await expect(desk.stop("No finding")).toBeChecked();
    await tabTo(desk.list);
    await press(page, "q", "m");
    await expect(desk.dialog).toHaveCount(0);
    await expect(desk.stop("No finding")).toBeChecked();
    await press(page, "Escape");
    await expect(desk.heading).toBeFocused();
  });
});
