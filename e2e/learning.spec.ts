import type { Locator, Page } from "@playwright/test";
import { and, eq } from "drizzle-orm";
import { approvals } from "@/db/schema/approvals";
import { scorers } from "@/db/schema/scorers";
import { newId } from "@/lib/new-id";
import { expectAccessible } from "./pages/accessibility";
import { textOf } from "./pages/text";
import { expect, test } from "./support/test";

const table = (page: Page): Locator =>
  page.getByRole("table", { name: "Scorers compared on the same labels" });
const rowOf = (page: Page, name: string): Locator => table(page).getByRole("row").filter({ hasText: name });
const waiting = (page: Page, name: string): Locator =>
  page.getByRole("region", { name: "Waiting for approval" }).getByRole("article").filter({ hasText: name });

test("a supervisor runs a scorer beside, cannot promote it alone, and the risk manager puts it in use", async ({
  db,
  office,
  openAs,
  complaints,
}) => {
  test.slow();
  complaints.expectStatus(403, 422);
  const supervisor = await office.person("supervisor");
  const theirs = await openAs(supervisor);
  const name = `Held tighter ${newId().slice(-8)}`;
  const reason = `Loses as little and moves less (${newId().slice(-8)})`;
  await theirs.goto("/learning");

  await test.step("the figures of the scorer in use are there, each with what it is over", async () => {
    const figures = theirs.getByRole("main").locator("dl").first();
    await expect(figures).toContainText(/Decisions learned from[1-9]/);
    await expect(figures).toContainText(/Cumulative loss\d+\.\d/);
    await expect(figures).toContainText(/Drift(✓ steady|▲ |not yet)/);
    const inUse = table(theirs).getByRole("row").nth(1);
    await expect(inUse).toContainText("In use, begun");
    await expect(inUse).toContainText(/0\.\d{4}–0\.\d{4}n \d/);
    await expect(theirs.getByRole("img", { name: /^Loss in nats at the end/ })).toBeVisible();
    await expect(theirs.getByRole("img", { name: /^Reliability of/ }).first()).toBeVisible();
  });

  await test.step("a setting out of range is told at its field; then the scorer runs beside", async () => {
    await theirs.getByRole("button", { name: "Run another beside it" }).click();
    const dialog = theirs.getByRole("dialog");
    await dialog.getByRole("textbox", { name: "Name" }).fill(name);
    const regularization = dialog.getByRole("textbox", { name: "Regularisation" });
    await regularization.fill("some");
    await dialog.getByRole("button", { name: "Run it" }).click();
    await expect(dialog.getByText("needs a number")).toBeVisible();
    await expectAccessible(theirs, "[role=dialog]");
    await regularization.fill("-1");
    await dialog.getByRole("button", { name: "Run it" }).click();
    await expect(regularization).toHaveAccessibleDescription(/must be between 1e-9 and 1e9/);
    await regularization.fill("0.6");
    await dialog.getByRole("button", { name: "Run it" }).click();
    await expect(theirs.getByText(`“${name}” runs beside it now`)).toBeVisible();
    await expect(rowOf(theirs, name)).toContainText("Improper; regularisation 0.6");
  });
  const [candidate] = await db.select().from(scorers).where(eq(scorers.name, name));
  expect(candidate).toMatchObject({ role: "candidate", method: "improper", createdBy: supervisor.personId });

  await test.step("it catches up on the labels by itself", async () => {
    await expect(async () => {
      await theirs.reload();
      await expect(rowOf(theirs, name)).not.toContainText("not yet taken in", { timeout: 500 });
      await expect(rowOf(theirs, name)).toContainText(/0\.\d{3}–[01]\.\d{3}n \d/, { timeout: 500 });
    }).toPass({ timeout: 60_000 });
  });

  await test.step("its promotion is proposed, with a reason", async () => {
    await theirs.getByRole("button", { name: `Propose promotion of ${name}` }).click();
    const dialog = theirs.getByRole("dialog");
    await dialog.getByRole("textbox", { name: "Reason" }).fill("  ");
    await dialog.getByRole("button", { name: "Propose" }).click();
    await expect(dialog.getByRole("textbox", { name: "Reason" })).toHaveAccessibleDescription(
      /needs a reason/,
    );
    await dialog.getByRole("textbox", { name: "Reason" }).fill(reason);
    await dialog.getByRole("button", { name: "Propose" }).click();
    await expect(
      theirs.getByText("Proposed. It waits above for a second person to approve it."),
    ).toBeVisible();
    await expect(rowOf(theirs, name)).toContainText("Promotion waits for approval");
  });
  const [wish] = await db.select().from(approvals).where(eq(approvals.reason, reason));
  expect(wish).toMatchObject({ kind: "scorer.promote", state: "waiting", proposedBy: supervisor.personId });

  await test.step("whoever proposed it is told why they cannot approve it, and the server refuses them", async () => {
    const approve = waiting(theirs, reason).getByRole("button", { name: "Approve" });
    await expect(approve).toHaveAttribute("aria-disabled", "true");
    await expect(approve).toHaveAccessibleDescription("You proposed this; a second person decides.");
    await approve.click({ force: true });
    await expect(theirs.getByRole("dialog")).toHaveCount(0);
    const status = await theirs.evaluate(async (id) => {
      const headers = { "Content-Type": "application/json", "Idempotency-Key": crypto.randomUUID() };
      return (await fetch(`/api/approvals/${id}/approve`, { method: "POST", headers, body: "{}" })).status;
    }, wish?.id);
    expect(status).toBe(403);
    const [still] = await db.select().from(scorers).where(eq(scorers.name, name));
    expect(still?.role).toBe("candidate");
  });

  const approver = await openAs(await office.person("risk_manager"));
  await test.step("the risk manager, who runs and drops none, approves it", async () => {
    await approver.goto("/learning");
    await expect(approver.getByRole("button", { name: "Run another beside it" })).toHaveCount(0);
    await expect(approver.getByRole("button", { name: /^Drop / })).toHaveCount(0);
    const article = waiting(approver, reason);
    await expect(article).toContainText(`Put “${name}” in use`);
    await expectAccessible(approver);
    await article.getByRole("button", { name: "Approve" }).click();
    await approver.getByRole("dialog").getByRole("button", { name: "Approve" }).click();
    await expect(approver.getByText("Approved and done.")).toBeVisible();
    await expect(article).toHaveCount(0);
  });

  await test.step("the new scorer is the one in use, and the one before it goes on beside", async () => {
    const inUse = table(approver).getByRole("row").nth(1);
    await expect(inUse).toContainText(name);
    await expect(inUse).toContainText("In use, begun");
    await expect(table(approver).getByRole("row").nth(2)).toContainText("Beside it, begun");
    const [now] = await db
      .select()
      .from(scorers)
      .where(and(eq(scorers.name, name), eq(scorers.role, "in_use")));
    expect(now?.id).toBe(candidate?.id);
    await approver.getByText(/^Decided before/).click();
    const settled = approver.getByRole("table", { name: "Proposals decided before, newest first" });
    await expect(settled.getByRole("row").filter({ hasText: reason })).toContainText("Approved by");
  });
});

test("the window of labels stands in the address and narrows every figure; the curve can be had as a file", async ({
  office,
  openAs,
}) => {
  const page = await openAs(await office.person("auditor"));
  await page.goto("/learning");
  const predicted = async () =>
    Number((await textOf(table(page).locator("tbody td").first())).replace(/\D/g, ""));
  const whole = await predicted();
  expect(whole).toBeGreaterThan(0);
  await expect(async () => {
    await page.getByLabel("Labels looked at").selectOption("Chosen days");
    await expect(page.getByLabel("To, inclusive")).toBeVisible({ timeout: 500 });
  }).toPass();
  const lastDay = new Date(Date.now() - 7 * 86_400_000).toISOString().slice(0, 10);
  await page.getByLabel("To, inclusive").fill(lastDay);
  await page.getByRole("button", { name: "Show", exact: true }).click();
  await expect(page).toHaveURL(new RegExp(`to=${lastDay}`));
  await expect.poll(predicted).toBeLessThan(whole);
  const narrowed = await predicted();
  await page.reload();
  expect(await predicted()).toBe(narrowed);

  await page.getByText("Show as table").first().click();
  const download = page.waitForEvent("download");
  await page.getByRole("link", { name: "Download as CSV" }).first().click();
  expect((await download).suggestedFilename()).toBe("cumulative-loss.csv");
});
