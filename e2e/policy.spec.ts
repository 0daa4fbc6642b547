import { eq } from "drizzle-orm";
import { policies } from "@/db/schema/policies";
import { newId } from "@/lib/new-id";
import { textOf } from "./pages/text";
import { expect, test } from "./support/test";

test("one supervisor proposes, cannot approve it, and the risk manager does; what was before is put back", async ({
  db,
  office,
  openAs,
  complaints,
}) => {
  complaints.expectStatus(403, 422);
  const supervisor = await office.person("supervisor");
  const theirs = await openAs(supervisor);
  const reason = `An hour of review costs more now (${newId().slice(-8)})`;
  await theirs.goto("/policy");
  const version = Number(/\d+/.exec(await textOf(theirs.getByText(/^Version \d+\./)))?.[0]);

  await test.step("propose", async () => {
    await theirs.getByRole("button", { name: "Propose a change" }).click();
    const editor = theirs.getByRole("region", { name: "Propose a change" });
    const cost = editor.getByRole("textbox", { name: "An hour of review" });
    await cost.fill("a lot");
    await expect(editor.getByText("Not a number yet: An hour of review.")).toBeVisible();
    await cost.fill("48.50");
    const changed = editor.getByRole("row").filter({ hasText: "An hour of review" });
    await expect(changed).toContainText("48.50");
    await editor.getByRole("button", { name: "Propose", exact: true }).click();
    await expect(editor.getByRole("textbox", { name: "Reason" })).toBeFocused();
    await editor.getByRole("textbox", { name: "Reason" }).fill(reason);
    await editor.getByRole("button", { name: "Propose", exact: true }).click();
    await expect(theirs.getByText("Proposed. It waits for somebody else to approve it.")).toBeVisible();
  });

  const [proposal] = await db.select().from(policies).where(eq(policies.reason, reason));
  expect(proposal).toMatchObject({ state: "proposed", proposedBy: supervisor.personId, version: null });

  await test.step("the one who proposed it is offered no approval, and gets none by asking the server", async () => {
    const article = theirs.getByRole("article").filter({ hasText: reason });
    await expect(article.getByText("You proposed this; somebody else approves it.")).toBeVisible();
    await expect(article.getByRole("button", { name: "Approve" })).toHaveCount(0);
    const answer = await theirs.evaluate(async (id) => {
      const headers = { "Content-Type": "application/json", "Idempotency-Key": crypto.randomUUID() };
      const body = JSON.stringify({ effectiveAt: null });
      const response = await fetch(`/api/policy/proposals/${id}/approve`, { method: "POST", headers, body });
      return { status: response.status, body: await response.json() };
    }, proposal?.id);
    expect(answer).toMatchObject({ status: 403, body: { detail: expect.stringMatching(/second person/) } });
  });

  const approver = await openAs(await office.person("risk_manager"));
  const approve = async (words: string) => {
    await approver.goto("/policy");
    const article = approver.getByRole("article").filter({ hasText: words });
    await article.getByRole("button", { name: "Approve" }).click();
    await approver.getByRole("dialog").getByRole("button", { name: "Approve" }).click();
    await expect(approver.getByText("The change is approved.")).toBeVisible();
    await expect(article).toHaveCount(0);
  };

  await test.step("a second person approves, and it is in force", async () => {
    await approve(reason);
    await expect(approver.getByText(`Version ${version + 1}. ${reason}`)).toBeVisible();
    const [approved] = await db.select().from(policies).where(eq(policies.reason, reason));
    expect(approved).toMatchObject({ state: "approved", version: version + 1 });
    expect(approved?.terms).toMatchObject({ reviewCostMinorPerHour: 4_850 });
  });

  const proposeAgain = async (earlier: number, words: string) => {
    await theirs.goto("/policy");
    const before = theirs.getByRole("region", { name: "History" }).getByRole("row", {
      name: new RegExp(`^${earlier} `),
    });
    await before.getByRole("button", { name: "Propose these again" }).click();
    const editor = theirs.getByRole("region", { name: "Propose a change" });
    await expect(editor.getByRole("row").filter({ hasText: "An hour of review" })).toBeVisible();
    await editor.getByRole("textbox", { name: "Reason" }).fill(words);
    await editor.getByRole("button", { name: "Propose", exact: true }).click();
    await expect(theirs.getByText("Proposed. It waits for somebody else to approve it.")).toBeVisible();
  };

  await test.step("the terms of before are put back, by two people again", async () => {
    await proposeAgain(version, `Back again: ${reason}`);
    await approve(`Back again: ${reason}`);
    const rows = await db.select().from(policies);
    const terms = (of: number) => rows.find((row) => row.version === of)?.terms;
    expect(terms(version + 2)).toEqual(terms(version));
  });

  await test.step("another one is declined, with a reason that its proposer finds in the history", async () => {
    await proposeAgain(version + 1, `Forth again: ${reason}`);
    await approver.goto("/policy");
    const article = approver.getByRole("article").filter({ hasText: `Forth again: ${reason}` });
    await article.getByRole("button", { name: "Decline" }).click();
    const dialog = approver.getByRole("dialog");
    const why = dialog.getByRole("textbox", { name: "Reason" });
    await dialog.getByRole("button", { name: "Decline" }).click();
    expect(await why.evaluate((field: HTMLTextAreaElement) => field.validity.valueMissing)).toBe(true);
    await expect(dialog).toBeVisible();
    await why.fill("Let it rest for a quarter");
    await dialog.getByRole("button", { name: "Decline" }).click();
    await expect(approver.getByText("The change is declined.")).toBeVisible();
    await theirs.goto("/policy");
    const row = theirs.getByRole("row").filter({ hasText: `Forth again: ${reason}` });
    await expect(row).toContainText("Declined because Let it rest for a quarter");
  });
});
