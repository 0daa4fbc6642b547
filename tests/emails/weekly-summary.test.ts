import { AxeBuilder } from "@axe-core/playwright";
import { type Browser, chromium } from "@playwright/test";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { weeklySummaryMail } from "@/emails/weekly-summary";
import type { WeekTotalsView, WeekView } from "@/lib/losses/schema";

const TOTALS: WeekTotalsView = {
  attempted: "5500.00",
  prevented: "4200.00",
  gross: "1300.00",
  missed: "700.00",
  recovered: "350.00",
  net: "950.00",
  falsePositive: "9600.00",
  lostMargin: "192.00",
  reviewCost: "1638.00",
  totalCost: "2780.00",
  settled: "1234567890.12",
  payments: 81_234,
  unpriced: 12,
  fraudulent: 63,
  legitimate: 357,
  customerMisuse: 0,
  valueDetection: 0.763636,
  fraudRateBp: 13,
  netRateBp: 9.5,
  totalCostBp: 27.8,
  precision: { share: 0.15, low: 0.119031, high: 0.187314, count: 63, of: 420 },
  costPerCase: "3.90",
};
const NOTHING: WeekTotalsView = {
  ...TOTALS,
  valueDetection: null,
  fraudRateBp: null,
  netRateBp: null,
  totalCostBp: null,
  precision: null,
  costPerCase: null,
};
const CASE_ID = "01912345-6789-7abc-8def-0123456789ab";

const VIEW: WeekView = {
  week: "2026-W48",
  by: "transaction",
  timeZone: "Europe/Paris",
  from: "2026-11-22T23:00:00.000Z",
  until: "2026-11-29T23:00:00.000Z",
  currency: "EUR",
  maturity: { state: "immature", maturesAt: "2027-03-29T22:00:00.000Z" },
  totals: TOTALS,
  previous: { week: "2026-W47", totals: TOTALS },
  change: {
    attempted: "0.00",
    prevented: "-120.50",
    gross: "1000000.00",
    missed: "0.00",
    recovered: "0.00",
    net: "-0.01",
    falsePositive: "0.00",
    lostMargin: "0.00",
    reviewCost: "0.00",
    totalCost: "0.00",
  },
  workload: { opened: 410, decided: 420, waiting: 35, overdue: 4, lapsed: 1 },
  largest: [
    {
      caseId: CASE_ID,
      number: 1_042,
      transactionId: CASE_ID,
      externalId: "a reference that the sender chose",
      channel: "instant_transfer",
      attempted: "700.00",
      prevented: "0.00",
    },
  ],
  typologies: [{ typology: "payer_manipulated", findings: 1, attempted: "700.00", prevented: "0.00" }],
};

const APP_URL = "https://cupel.example.test";
const mailOf = (view: WeekView, unsubscribeUrl: string | null = `${APP_URL}/unsubscribe/secret`) =>
  weeklySummaryMail({ view, appUrl: APP_URL, unsubscribeUrl });

/** What a reader sees: markup gone, entities read, kinds of space alike. */
const words = (text: string) =>
  text
    .replace(/<style>[\s\S]*?<\/style>/g, "")
    .replace(/<!--[\s\S]*?-->/g, "")
    .replace(/<[^>]+>/g, "")
    .replaceAll("&amp;", "&")
    .replaceAll("&#x27;", "'")
    .replace(/\s/g, " ");

describe("the weekly summary", () => {
  test.each(["html", "text"] as const)("says every figure with its unit, in %s", async (kind) => {
    const body = words((await mailOf(VIEW))[kind]);
    for (const said of [
      "Losses in week 48 of 2026",
      "Monday 23 November 2026 to Sunday 29 November 2026, by the clock of Europe/Paris",
      "Provisional: chargebacks and reports about these payments may arrive until Tuesday 30 March 2027",
      "12 of 81234 payments are in currencies without a rate",
      "Net loss: 950.00 EUR",
      "0.01 EUR less than the week before",
      "1 000 000.00 EUR more than the week before",
      "as in the week before",
      "Value detection: 76.4 % of the value attempted",
      "Fraud rate: 13 basis points",
      "gross loss in 1 234 567 890.12 EUR that went through",
      "per case decided: 3.90 EUR",
      "27.8 basis points",
      "Case 1042: 700.00 EUR",
      "Instant transfer; prevented: 0.00 EUR",
      "Payer manipulated: 700.00 EUR",
      "Past their deadline among them: 4",
      "15.0 %, 95 % interval 11.9 % to 18.7 %",
      "63 of 420",
    ]) {
      expect(body).toContain(said);
    }
  });

  test("leads to the case, the week and the way out, and nowhere else", async () => {
    const { html, text } = await mailOf(VIEW);
    const links = [...html.matchAll(/href="([^"]+)"/g)].map(([, url]) => url?.replaceAll("&amp;", "&"));
    const wanted = [
      `${APP_URL}/cases/${CASE_ID}`,
      `${APP_URL}/losses?week=2026-W48&by=transaction`,
      `${APP_URL}/unsubscribe/secret`,
    ];
    expect(links).toEqual(wanted);
    for (const url of wanted) expect(text).toContain(url);
    expect((await mailOf(VIEW, null)).text).not.toContain("unsubscribe");
  });

  test("shows neither names nor senders' references, and nothing but words in its subject", async () => {
    const { subject, html, text } = await mailOf(VIEW);
    expect(html + text).not.toContain("a reference that the sender chose");
    expect(subject).toBe("Losses in week 48 of 2026");
  });

  test("says not defined where there is nothing to divide by, and what there is none of", async () => {
    const empty = { ...VIEW, totals: NOTHING, largest: [], typologies: [] };
    const body = words((await mailOf(empty)).text);
    for (const said of [
      "Value detection: not defined",
      "Fraud rate: not defined",
      "per case decided: not defined",
      "Fraudulent among the alerts decided: not defined",
      "No payment of this week has been found fraudulent.",
    ]) {
      expect(body).toContain(said);
    }
  });

  test("of a mature week carries no caution", async () => {
    const settled = { ...VIEW, maturity: { ...VIEW.maturity, state: "mature" as const } };
    expect((await mailOf(settled)).text).not.toContain("Provisional");
  });
});

describe("in a reader's window", () => {
  let browser: Browser;
  beforeAll(async () => {
    browser = await chromium.launch({ executablePath: "/usr/bin/chromium", args: ["--no-sandbox"] });
  });
  afterAll(() => browser.close());

  test.each(["light", "dark"] as const)(
    "it fits 320 pixels and is legible without images, in %s colours",
    async (colorScheme) => {
      const { html } = await mailOf(VIEW);
      expect(html).not.toMatch(/<img|background-image|url\(/);
      const context = await browser.newContext({ viewport: { width: 320, height: 640 }, colorScheme });
      const page = await context.newPage();
      await page.setContent(html);
      const width = await page.evaluate(() => document.documentElement.scrollWidth);
      expect(width).toBeLessThanOrEqual(320);
      const { violations } = await new AxeBuilder({ page }).analyze();
      // A message is no page: it stands inside a mail program's own landmarks.
      const found = violations.filter(({ id }) => id !== "region" && id !== "landmark-one-main");
      expect(found.map(({ id, nodes }) => `${id}: ${nodes.map(({ html }) => html).join()}`)).toEqual([]);
      await context.close();
    },
  );
});
