import { desc, eq } from "drizzle-orm";
import { approvals } from "@/db/schema/approvals";
import { ownSignals } from "@/db/schema/learning";
import { newId } from "@/lib/new-id";
import type { OpenedCase } from "./support/office";
import { suspiciousPayments } from "./support/payments";
import { expect, test } from "./support/test";

test("a supervisor writes a signal, sees what it measures, and a second person switches it on", async ({
  db,
  office,
  openAs,
  complaints,
}) => {
  // The whole log is learned again, twice.
  test.slow();
  complaints.expectStatus(403);
  const mark = newId().slice(-8);
  const attribute = `parcels_${mark}`;
  const name = `Parcels ${mark}`;
  const owner = await office.person("reviewer");
  const payments = suspiciousPayments(3).map((payment, index) => ({
    ...payment,
    attributes: { [attribute]: [3, 8, 1][index] },
  }));
  const [, many, few] = (await office.openCases(payments, owner)) as [OpenedCase, OpenedCase, OpenedCase];
  await office.decide(many, "fraudulent", "details_theft");
  const supervisor = await office.person("supervisor");
  const theirs = await openAs(supervisor);

  await test.step("define it, with the mistakes named where they are", async () => {
    await theirs.goto("/signals");
    await theirs.getByRole("button", { name: "Define a signal" }).click();
    const dialog = theirs.getByRole("dialog");
    const formula = dialog.getByRole("textbox", { name: "Formula" });
    await formula.fill("attributes.nationality");
    await expect(dialog.getByText(/nationality, which is never a signal/)).toBeVisible();
    await formula.fill(`min(attributes.${attribute}, 5) +`);
    await expect(dialog.getByText("The formula ends too early")).toBeVisible();
    await formula.fill(`min(attribute.${attribute}, 5)`);
    await expect(dialog.getByText(/Line 1, character \d+/)).toBeVisible();
    await formula.fill(`min(attributes.${attribute}, 5)`);
    await expect(dialog.getByText(/Available in 3 of the newest/)).toBeVisible();
    await dialog.getByRole("textbox", { name: "Name" }).fill(name);
    await dialog
      .getByRole("textbox", { name: "Sentence for reviewers" })
      .fill("How many parcels were sent at once.");
    await dialog.getByRole("button", { name: /^Take / }).click();
    await expect(dialog.getByRole("textbox", { name: "Middle" })).toHaveValue("3");
    await dialog.getByRole("button", { name: "Save as a draft" }).click();
    await expect(theirs.getByText("Defined. Propose to switch it on when it is right.")).toBeVisible();
  });

  const item = theirs.getByRole("listitem", { name });
  await test.step("propose to switch it on", async () => {
    await expect(item.getByText("Draft: counts for nothing yet")).toBeVisible();
    await item.getByRole("button", { name: "Propose to switch on" }).click();
    const dialog = theirs.getByRole("dialog");
    await dialog.getByRole("button", { name: "Propose" }).click();
    // Nothing goes without a reason.
    await expect(dialog.getByRole("textbox", { name: "Reason" })).toBeFocused();
    await dialog.getByRole("textbox", { name: "Reason" }).fill("Seen in three cases this week");
    await dialog.getByRole("button", { name: "Propose" }).click();
    await expect(theirs.getByText("Proposed. It waits for somebody else to approve it.")).toBeVisible();
    await expect(item.getByText(/To be switched on: proposed by/)).toBeVisible();
    await expect(item.getByRole("link", { name: "approvals" })).toHaveAttribute(
      "href",
      "/learning#approvals",
    );
    await expect(item.getByRole("button")).toHaveCount(0);
  });

  const [signal] = await db.select().from(ownSignals).where(eq(ownSignals.name, name));
  const approve = async (page: typeof theirs) => {
    const [newest] = await db.select().from(approvals).orderBy(desc(approvals.proposedAt)).limit(1);
    expect(newest).toMatchObject({ state: "waiting", subject: { signalId: signal?.id } });
    return page.evaluate(async (id) => {
      const headers = { "Content-Type": "application/json", "Idempotency-Key": crypto.randomUUID() };
      const response = await fetch(`/api/approvals/${id}/approve`, { method: "POST", headers, body: "{}" });
      return response.status;
    }, newest?.id);
  };

  await test.step("not by whoever proposed it; by a second person", async () => {
    expect(await approve(theirs)).toBe(403);
    const second = await openAs(await office.person("risk_manager"));
    await second.goto("/signals");
    await expect(second.getByRole("button", { name: "Define a signal" })).toHaveCount(0);
    expect(await approve(second)).toBe(200);
    await second.reload();
    await expect(second.getByRole("listitem", { name }).getByText("On", { exact: true })).toBeVisible();
  });

  await test.step("the case shows its line", async () => {
    const reviewer = await openAs(owner);
    await reviewer.goto(`/cases/${few.caseId}`);
    const balance = reviewer.getByRole("list", { name: "What the evidence is made of, in decibans" });
    await expect(balance.getByRole("listitem").filter({ hasText: name })).toContainText("about 1");
  });

  await test.step("and it is switched off again the same way", async () => {
    await theirs.reload();
    await item.getByRole("button", { name: "Propose to switch off" }).click();
    await theirs.getByRole("dialog").getByRole("textbox", { name: "Reason" }).fill("It was one sender only");
    await theirs.getByRole("dialog").getByRole("button", { name: "Propose" }).click();
    await expect(item.getByText(/To be switched off: proposed by/)).toBeVisible();
    const third = await openAs(await office.person("risk_manager"));
    await third.goto("/signals");
    expect(await approve(third)).toBe(200);
    await theirs.reload();
    await expect(item.getByText("Off", { exact: true })).toBeVisible();
  });
});

test("the catalogue is searched by any of its words, and the address keeps the search", async ({
  office,
  openAs,
}) => {
  const page = await openAs(await office.person("auditor"));
  await page.goto("/signals");
  const catalogue = page.getByRole("region", { name: "Catalogue" });
  const all = await catalogue.getByRole("listitem").count();
  expect(all).toBeGreaterThan(20);
  await catalogue.getByRole("searchbox", { name: "Search the catalogue" }).fill("amount usual");
  await expect(catalogue.getByRole("listitem")).toHaveCount(1);
  await expect(page).toHaveURL(/search=amount/);
  await page.reload();
  await expect(catalogue.getByText(/^1 of \d+ signals$/)).toBeVisible();
  await catalogue.getByText(/formulas and weights/).click();
  await expect(catalogue.getByRole("table")).toContainText("clip(ln(v) / ln(10))");
  await catalogue.getByRole("searchbox").fill("no such word at all");
  await expect(catalogue.getByText("No signal has these words")).toBeVisible();
});
