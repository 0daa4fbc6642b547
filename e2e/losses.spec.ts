import { awaitMail } from "@/tests/support/mailbox";
import { textOf } from "./pages/text";
import { running } from "./support/running";
import { expect, test } from "./support/test";

test("the week's losses are sent at once to somebody new on the list, who then stops them by the link in the mail", async ({
  office,
  openAs,
  page: theirs,
}) => {
  const reader = await office.person("supervisor");
  const page = await openAs(await office.person("risk_manager"));
  await page.goto("/losses");
  const week = /\d{4}-W\d{2}/.exec(await textOf(page.getByRole("button", { name: /^Preview/ })))?.[0] ?? "";
  const attempted = page.getByRole("region", { name: "Amounts" }).getByRole("row", { name: /^Attempted/ });
  const amount = await textOf(attempted.getByRole("cell").first());

  await test.step("put somebody on the list", async () => {
    await page.getByRole("button", { name: "Add somebody" }).click();
    const dialog = page.getByRole("dialog");
    await dialog.getByRole("combobox", { name: "Person" }).selectOption(reader.personId);
    await dialog.getByRole("button", { name: "Save" }).click();
    await expect(page.getByText(`${reader.name} gets the summary on Monday at`)).toBeVisible();
  });

  await test.step("send the week now", async () => {
    await page.getByRole("button", { name: `Send ${week} now` }).click();
    await page.getByRole("dialog").getByRole("button", { name: "Send now" }).click();
    await expect(page.getByText(/^[1-9]\d* on their way/)).toBeVisible();
  });

  const [mail, ...more] = await awaitMail(running().mailUrl, reader.email);
  if (!mail) throw new Error("A mail came");
  const link = /href="([^"]+)"[^>]*>Stop these summaries/.exec(mail.html)?.[1] ?? "";

  await test.step("the mail says what the page says, in HTML and in plain text", async () => {
    expect(more).toEqual([]);
    expect(mail.subject).toContain(`week ${Number(week.slice(-2))}`);
    const digits = (text: string) => text.replace(/[^\d.]/g, "");
    expect(digits(amount)).toMatch(/^\d+\.\d\d$/);
    expect(digits(/Attempted fraud: (.*)\n/.exec(mail.text)?.[1] ?? "")).toBe(digits(amount));
    await theirs.setContent(mail.html);
    const figure = theirs.locator("p", { hasText: "Attempted fraud" });
    expect(digits(await textOf(figure))).toBe(digits(amount));
    expect(mail.text).toContain(link);
    await theirs.setViewportSize({ width: 320, height: 640 });
    const tooWide = await theirs.evaluate(
      () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
    );
    expect(tooWide).toBe(0);
  });

  await test.step("the link stops them, without signing in and not by being opened alone", async () => {
    await theirs.goto(link);
    await expect(theirs.getByRole("heading", { level: 1 })).toHaveText("Weekly summaries");
    const row = page.getByRole("region", { name: "Weekly summary" }).getByRole("row", { name: reader.name });
    await page.reload();
    await expect(row).toContainText("On the list");
    await theirs.getByRole("button", { name: "Stop the weekly summaries" }).click();
    await expect(theirs.getByText("No further summary is sent")).toBeVisible();
    await page.reload();
    await expect(row).toContainText("Unsubscribed");
  });

  await test.step("sending the week once more does not reach them", async () => {
    await page.getByRole("button", { name: `Send ${week} now` }).click();
    await page.getByRole("dialog").getByRole("button", { name: "Send now" }).click();
    await expect(page.getByText(/^0 on their way/)).toBeVisible();
  });
});
