import { readFile } from "node:fs/promises";
import type { Page } from "@playwright/test";
import { and, eq } from "drizzle-orm";
import type { Database } from "@/db/client";
import { transactions } from "@/db/schema/transactions";
import { newId } from "@/lib/new-id";
import { expect, test } from "./support/test";

const HEADER = "Payment ref,When,Value,Ccy,Kind,Customer,Shop,Merchant country,SCA,Basket";
const ROWS = 600;
/** A card number for tests, as the card schemes publish them; never anybody's. */
const CARD_NUMBER = "4111111111111111";

type Habit = { accountId: string; counterpartyId: string };

/** Small purchases such as the demo's accounts make every day, so that the queue of other tests does not fill. */
async function findHabits(db: Database): Promise<Habit[]> {
  const habits = await db
    .selectDistinct({ accountId: transactions.accountId, counterpartyId: transactions.counterpartyId })
    .from(transactions)
    .where(and(eq(transactions.source, "core-banking"), eq(transactions.channel, "card_present")))
    .limit(50);
  expect(habits.length).toBe(50);
  return habits;
}

/** Lines of a file in somebody's own words for the columns; each of the broken ones has one fault. */
function linesOf(batch: string, habits: readonly Habit[]): string[] {
  const row = (index: number, change: Record<string, string> = {}) => {
    const cells = {
      ref: `${batch}-${index}`,
      when: new Date(Date.now() - 3_600_000 * (30 + index)).toISOString(),
      value: "12.40",
      currency: "EUR",
      kind: "card_present",
      customer: habits[index % habits.length]?.accountId,
      shop: habits[index % habits.length]?.counterpartyId,
      country: "IE",
      authentication: "strong",
      basket: "groceries",
      ...change,
    };
    return Object.values(cells).join(",");
  };
  const lines = Array.from({ length: ROWS }, (_, index) => row(index));
  lines[10] = row(10, { currency: "EURO" });
  lines[20] = row(20, { value: '"12,40"' });
  lines[30] = row(30, { customer: CARD_NUMBER });
  lines[40] = row(40, { kind: "cheque" });
  return [HEADER, ...lines];
}

/** Keeps the file on its way, as a slow line would. @returns what lets it through */
async function holdUpload(page: Page): Promise<() => void> {
  let letGo = () => {};
  const held = new Promise<void>((resolve) => {
    letGo = resolve;
  });
  await page.route("**/api/imports", async (route) => {
    if (route.request().method() === "POST") await held;
    await route.continue();
  });
  return letGo;
}

test("a file with its own column names comes in, its bad rows come back as a download, and leaving the page costs nothing", async ({
  db,
  office,
  openAs,
}) => {
  const batch = `F${newId().slice(-8)}`;
  const buffer = Buffer.from(`${linesOf(batch, await findHabits(db)).join("\r\n")}\r\n`);
  const page = await openAs(await office.person("supervisor"));
  await page.goto("/intake");
  const upload = page.getByRole("region", { name: "Send a file" });
  await upload
    .getByLabel("Choose a CSV file, or drop one here")
    .setInputFiles({ name: `${batch}.csv`, mimeType: "text/csv", buffer });

  await test.step("map the columns", async () => {
    await expect(upload.getByRole("combobox", { name: "Payment ref" })).toHaveValue("externalId");
    await expect(upload.getByRole("combobox", { name: "When" })).toHaveValue("occurredAt");
    await expect(upload.getByRole("combobox", { name: "Value" })).toHaveValue("amount");
    const standing = upload.getByRole("status");
    await expect(standing).toContainText("Still without a column");
    await expect(standing.getByRole("listitem")).toHaveText(["Channel", "Counterparty"]);
    await upload.getByRole("combobox", { name: "Kind" }).selectOption("channel");
    await upload.getByRole("combobox", { name: "Shop" }).selectOption("counterpartyId");
    await upload.getByRole("combobox", { name: "Basket" }).selectOption("attributes.Basket");
    await expect(standing).toHaveText("Every required field has its column.");
    await upload.getByRole("textbox", { name: "Source" }).fill(batch.toLowerCase());
  });

  await test.step("send it, and see how far it is", async () => {
    const letGo = await holdUpload(page);
    await upload.getByRole("button", { name: "Send the file" }).click();
    await expect(upload.getByRole("progressbar", { name: `Sending ${batch}.csv` })).toBeVisible();
    await expect(upload.getByRole("heading", { name: `Sending ${batch}.csv` })).toBeFocused();
    letGo();
    await expect(upload.getByText(`${batch}.csv came in whole and is being read`)).toBeVisible();
  });

  await test.step("leave the page at once, and find the file again", async () => {
    await page.getByRole("navigation", { name: "Pages" }).getByRole("link", { name: "Floor" }).click();
    await expect(page.getByRole("heading", { level: 1 })).toHaveText("Floor");
    await page.getByRole("navigation", { name: "Pages" }).getByRole("link", { name: "Intake" }).click();
    await page
      .getByRole("region", { name: "Files" })
      .getByRole("link", { name: `${batch}.csv` })
      .click();
    await expect(page.getByRole("heading", { level: 1 })).toHaveText(`${batch}.csv`);
  });

  await test.step("the page follows it to its end by itself", async () => {
    const outcome = page.getByRole("region", { name: "What came of it" });
    await expect(page.getByRole("region", { name: "Rejected rows" })).toContainText("4 rows were rejected", {
      timeout: 45_000,
    });
    await expect(outcome).toContainText(/Rows read\s*600/);
    await expect(outcome).toContainText(/New payments\s*596/);
    await expect(outcome).toContainText(/Rejected\s*4/);
  });

  await test.step("what failed comes as a download, by line and field", async () => {
    const waiting = page.waitForEvent("download");
    await page.getByRole("link", { name: "Download all as CSV" }).click();
    const text = await readFile(await (await waiting).path(), "utf8");
    const [head, ...faults] = text.trimEnd().split("\r\n");
    expect(head).toBe("line,externalId,field,message");
    expect(faults.map((line) => line.split(",").slice(0, 3))).toEqual([
      ["12", `${batch}-10`, "currency"],
      ["22", `${batch}-20`, "amount"],
      ["32", `${batch}-30`, "accountId"],
      ["42", `${batch}-40`, "channel"],
    ]);
    expect(text).not.toContain(CARD_NUMBER);
  });

  await test.step("the same file again brings nothing twice", async () => {
    await page.goto("/intake");
    await upload
      .getByLabel("Choose a CSV file, or drop one here")
      .setInputFiles({ name: `again-${batch}.csv`, mimeType: "text/csv", buffer });
    await upload.getByRole("combobox", { name: "Kind" }).selectOption("channel");
    await upload.getByRole("combobox", { name: "Shop" }).selectOption("counterpartyId");
    await upload.getByRole("combobox", { name: "Basket" }).selectOption("attributes.Basket");
    await upload.getByRole("textbox", { name: "Source" }).fill(batch.toLowerCase());
    await upload.getByRole("button", { name: "Send the file" }).click();
    await upload.getByRole("link", { name: "Follow it" }).click();
    await expect(page.getByRole("region", { name: "Rejected rows" })).toContainText("4 rows were rejected", {
      timeout: 45_000,
    });
    await expect(page.getByRole("region", { name: "What came of it" })).toContainText(/Known already\s*596/);
  });
});

test("a file that is no table of payments is refused before anything is sent", async ({ office, openAs }) => {
  const page = await openAs(await office.person("supervisor"));
  await page.goto("/intake");
  const sent: string[] = [];
  page.on("request", (request) => request.method() === "POST" && sent.push(request.url()));
  const upload = page.getByRole("region", { name: "Send a file" });
  const file = { name: "empty.csv", mimeType: "text/csv", buffer: Buffer.alloc(0) };
  await upload.getByLabel("Choose a CSV file, or drop one here").setInputFiles(file);
  await expect(upload.getByRole("alert")).toContainText("empty.csv");
  expect(sent.filter((url) => url.includes("/api/imports"))).toEqual([]);
});
