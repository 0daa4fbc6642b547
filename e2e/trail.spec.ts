import { alertOn, textOf } from "./pages/text";
import { suspiciousPayments } from "./support/payments";
import { expect, test } from "./support/test";

test("an auditor searches the trail, opens one decision as it was, and verifies the chain", async ({
  office,
  openAs,
}) => {
  const [opened] = await office.openCases(suspiciousPayments(1), await office.person("supervisor"));
  if (!opened) throw new Error("A case was opened");
  await office.decide(opened, "fraudulent", "details_theft");
  const auditor = await office.person("auditor");
  const page = await openAs(auditor);
  await page.goto("/trail");
  const entries = page.getByRole("region", { name: "Entries" }).getByRole("row");

  await test.step("search", async () => {
    await page.getByRole("textbox", { name: "Case number" }).fill(String(opened.number));
    await page.getByRole("combobox", { name: "Act" }).selectOption("Decided");
    await page.getByRole("button", { name: "Search" }).click();
    await expect(page).toHaveURL(new RegExp(`case=${opened.number}`));
    await expect(entries).toHaveCount(2);
    await expect(entries.last()).toContainText("Decided");
  });

  await test.step("the decision", async () => {
    await entries.last().getByRole("link", { name: "decision", exact: true }).click();
    await expect(page.getByRole("heading", { level: 1 })).toHaveText(`Decision on case ${opened.number}`);
    await expect(page.getByText("Fraudulent, sure (card details theft)")).toBeVisible();
    await expect(page.getByText("The score comes out again, bit for bit")).toBeVisible();
    const lines = page.getByRole("list", { name: "What the evidence is made of, in decibans" });
    const decibans = await lines
      .getByRole("listitem")
      .evaluateAll((items) =>
        items.map((item) => Number((item.lastElementChild?.textContent ?? "").replace("−", "-"))),
      );
    const total = decibans.at(-1) as number;
    const sum = decibans.slice(0, -1).reduce((one, other) => one + other, 0);
    // Each line is rounded to a tenth by itself.
    expect(Math.abs(sum - total)).toBeLessThanOrEqual(0.05 * decibans.length);
    await expect(page.getByRole("table", { name: /All that happened to the case/ })).toContainText("Decided");
  });

  await test.step("every score of the case, derived again", async () => {
    await page.goto(`/cases/${opened.caseId}`);
    const scores = page.getByRole("region", { name: "Scores over time" });
    const again = scores.getByRole("button", { name: "Derive again" });
    await expect(scores.getByRole("listitem").first()).toContainText("At arrival");
    await expect(scores.getByRole("listitem").last()).toContainText("Decision by");
    // At arrival, and with the verdict; more where a linked payment was labelled meanwhile.
    expect(await again.count()).toBeGreaterThanOrEqual(2);
    for (const button of await again.all()) await button.click();
    await expect(scores.getByText("It comes out again, equal bit for bit.")).toHaveCount(await again.count());
    await expect(scores.getByText("What would have changed it then").first()).toBeVisible();
  });

  await test.step("the chain", async () => {
    await page.goto("/trail");
    await page.getByRole("button", { name: "Verify the chain" }).click();
    const result = page.getByRole("status").filter({ hasText: "The chain is intact" });
    await expect(result).toBeVisible();
    const place = await textOf(result.locator("strong"));
    const hash = /[0-9a-f]{64}/.exec(await textOf(result))?.[0] ?? "";
    await page.getByRole("textbox", { name: "Place noted earlier" }).fill(place);
    await page.getByRole("textbox", { name: "Its hash" }).fill(hash);
    await page.getByRole("button", { name: "Verify the chain" }).click();
    await expect(page.getByText("The entry you noted stands as it was.")).toBeVisible();
    await page
      .getByRole("textbox", { name: "Its hash" })
      .fill(hash.replace(/^./, (digit) => (digit === "0" ? "1" : "0")));
    await page.getByRole("button", { name: "Verify the chain" }).click();
    await expect(alertOn(page)).toContainText("the entry you noted is gone or not what it was");
  });

  await test.step("what the auditor read is itself in the trail", async () => {
    await page.goto(`/trail?person=${auditor.personId}`);
    await expect(entries.filter({ hasText: "Chain verified" })).toHaveCount(3);
    await expect(entries.filter({ hasText: "Trail read" }).first()).toBeVisible();
  });
});
