import path from "node:path";
import { type Browser, chromium, expect, type Page } from "@playwright/test";
import type { Role } from "@/lib/auth/codes";
import type { QueueView } from "@/lib/cases/schema";
import { startApp } from "@/tests/support/app";
import { DeskPage } from "../pages/desk";
import { press } from "../pages/keyboard";
import { menuLinks, SignInPage } from "../pages/sign-in";
import { CHROMIUM } from "../support/chromium";
import { demoPerson } from "../support/demo";

/**
 * Makes the README's pictures anew, on a demo of their own:
 * `TSX_TSCONFIG_PATH=db/commands/tsconfig.json node --import tsx e2e/tour/make.ts`
 */
type Picture = {
  as: Role;
  dark?: boolean;
  /** Seen from so much farther away, for what needs a large screen; the picture keeps its size. */
  zoom?: number;
  /** Brings the page to what is to be seen. */
  show: (page: Page) => Promise<void>;
};

const open = (name: string) => async (page: Page) => {
  await menuLinks(page).filter({ hasText: name }).click();
  await page.getByRole("heading", { level: 1, name: new RegExp(`^${name}`) }).waitFor();
};

const PICTURES: Record<string, Picture> = {
  "desk-light": {
    as: "reviewer",
    show: async (page) => {
      await openHeaviest(page);
      await press(page, "ArrowRight", "ArrowRight", "3");
    },
  },
  "desk-dark": { as: "reviewer", dark: true, zoom: 2 / 3, show: openHeaviest },
  floor: { as: "supervisor", show: open("Floor") },
  policy: { as: "supervisor", show: open("Policy") },
  learning: { as: "supervisor", zoom: 0.8, show: openLearning },
  losses: { as: "risk_manager", show: open("Losses") },
  trail: { as: "auditor", show: async (page) => void (await page.goto("/trail?act=case.decided")) },
  intake: { as: "supervisor", show: importWithFaults },
};

/** With the best weights in hindsight, which a job works out soon after the start. */
async function openLearning(page: Page): Promise<void> {
  const reckoned = async () => {
    await page.goto("/learning");
    return page.getByText(/over \d+ labels, reckoned/).isVisible();
  };
  await expect.poll(reckoned, { timeout: 120_000, intervals: [5_000] }).toBe(true);
}

/** The case that the evidence speaks against most, of those that are anybody's. */
async function openHeaviest(page: Page): Promise<void> {
  const answer = await page.request.get("/api/queue?limit=50");
  const { items } = (await answer.json()) as QueueView;
  const heaviest = items.find(({ assignedTo }) => assignedTo === null);
  await new DeskPage(page).open(heaviest?.caseId);
}

/** A handful of payments, two of which cannot come in. */
async function importWithFaults(page: Page): Promise<void> {
  await open("Intake")(page);
  const rows = Array.from({ length: 40 }, (_, index) => {
    const amount = index === 11 ? "thirteen" : (8.5 + index).toFixed(2);
    const currency = index === 23 ? "EURO" : "EUR";
    return `N-${1000 + index},2026-11-30T${10 + (index % 10)}:15:00Z,${amount},${currency},card_present,AC-${index},SHOP-4`;
  });
  const head = "Payment ref,When,Value,Ccy,Channel,Customer,Merchant";
  const buffer = Buffer.from([head, ...rows, ""].join("\r\n"));
  const file = { name: "branch-payments.csv", mimeType: "text/csv", buffer };
  await page.getByLabel("Choose a CSV file, or drop one here").setInputFiles(file);
  await page.getByRole("button", { name: "Send the file" }).click();
  await page.getByRole("link", { name: "Follow it" }).click();
  await page.getByText("2 rows were rejected").waitFor();
}

async function take(browser: Browser, baseURL: string, name: string, picture: Picture): Promise<void> {
  const { zoom = 1 } = picture;
  const page = await browser.newPage({
    baseURL,
    viewport: { width: 1280 / zoom, height: 800 / zoom },
    deviceScaleFactor: zoom,
    colorScheme: picture.dark ? "dark" : "light",
    reducedMotion: "reduce",
    locale: "en-GB",
    timezoneId: "Europe/Dublin",
  });
  const { email, password } = demoPerson(picture.as);
  const form = new SignInPage(page);
  await form.open();
  await form.enter(email, password);
  await page.waitForURL((url) => url.pathname !== "/sign-in");
  await picture.show(page);
  await page.waitForTimeout(1_500);
  await page.screenshot({ path: path.join(import.meta.dirname, `${name}.png`) });
  await page.close();
}

const app = await startApp({ env: { CUPEL_DEMO: "1" } });
const browser = await chromium.launch(CHROMIUM);
try {
  for (const [name, picture] of Object.entries(PICTURES)) await take(browser, app.url, name, picture);
} finally {
  await browser.close();
  await app.stop();
}
