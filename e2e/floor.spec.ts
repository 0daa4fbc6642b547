import { inArray } from "drizzle-orm";
import { cases } from "@/db/schema/cases";
import { press, tabTo } from "./pages/keyboard";
import { alertOn } from "./pages/text";
import { suspiciousPayments } from "./support/payments";
import { expect, test } from "./support/test";

test("a supervisor chooses many cases by keyboard and assigns them in one act", async ({
  db,
  office,
  openAs,
}) => {
  const reviewer = await office.person("reviewer");
  const opened = await office.openCases(suspiciousPayments(5), await office.person("supervisor"));
  const page = await openAs(await office.person("supervisor"));
  await page.goto("/floor");
  await tabTo(page.getByRole("searchbox", { name: "Number, id or account" }));
  await page.keyboard.type(opened[0]?.accountId ?? "");
  await press(page, "Enter");
  await expect(page.getByText("5 undecided cases fit.")).toBeVisible();

  const boxes = page.getByRole("checkbox", { name: /^Choose case/ });
  await tabTo(boxes.first());
  await press(page, "Space", "Shift+ArrowDown", "Shift+ArrowDown");
  await expect(page.getByText("3 cases chosen")).toBeVisible();
  const chosen = await boxes.evaluateAll((all) =>
    all.flatMap((box) => (box instanceof HTMLInputElement && box.checked ? [box.dataset.row ?? ""] : [])),
  );
  await tabTo(page.getByRole("combobox", { name: "Assign to" }), "Shift+Tab");
  await page.keyboard.type(reviewer.name);
  await expect(page.getByRole("combobox", { name: "Assign to" })).toHaveValue(reviewer.personId);
  await tabTo(page.getByRole("button", { name: "Assign", exact: true }));
  await press(page, "Enter");
  await expect(page.getByText(`3 cases assigned to ${reviewer.name}.`)).toBeVisible();

  const assigned = async () => {
    const ids = opened.map(({ caseId }) => caseId);
    const rows = await db.select().from(cases).where(inArray(cases.id, ids));
    return rows.filter((row) => row.assignedTo === reviewer.personId).map(({ id }) => id);
  };
  expect((await assigned()).sort()).toEqual(chosen.sort());

  await tabTo(boxes.first());
  await press(page, "Control+a");
  await expect(page.getByText("5 cases chosen")).toBeVisible();
  await tabTo(page.getByRole("button", { name: "Assign to nobody" }), "Shift+Tab");
  await press(page, "Enter");
  await expect(page.getByText("5 cases assigned to nobody.")).toBeVisible();
  expect(await assigned()).toEqual([]);
});

test("where one of the chosen cases cannot be assigned, none is, and the page says which and why", async ({
  db,
  office,
  openAs,
  complaints,
}) => {
  complaints.expectStatus(409);
  const reviewer = await office.person("reviewer");
  const owner = await office.person("supervisor");
  const opened = await office.openCases(suspiciousPayments(3), owner);
  const [, second] = opened;
  if (!second) throw new Error("Three cases were opened");
  const page = await openAs(await office.person("supervisor"));
  await page.goto(`/floor?search=${second.accountId}`);
  await page.getByRole("checkbox", { name: "Choose all that are shown" }).check();
  await page.getByRole("combobox", { name: "Assign to" }).selectOption(reviewer.name);
  await office.decide(second, "legitimate");
  await page.getByRole("button", { name: "Assign", exact: true }).click();
  await expect(alertOn(page)).toContainText(`Case ${second.number}: Somebody has decided this case already`);
  const ids = opened.map(({ caseId }) => caseId);
  const rows = await db.select().from(cases).where(inArray(cases.id, ids));
  expect(rows.map(({ assignedTo }) => assignedTo)).toEqual(opened.map(() => owner.personId));
});
