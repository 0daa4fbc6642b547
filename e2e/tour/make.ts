import { type Browser, chromium, type Page } from "@playwright/test";
import type { Role } from "@/lib/auth/codes";
import { SignInPage } from "../pages/sign-in";
import { CHROMIUM } from "../support/chromium";
import { demoPerson } from "../support/demo";

/** Makes the README's pictures from a demo that runs: `npx tsx e2e/tour/make.ts http://127.0.0.1:3000`. */
const [address = "http://127.0.0.1:3000"] = process.argv.slice(2);

type Picture = { file: string; role: Role; path: string; theme: "light" | "dark"; ready: string };

const PICTURES: readonly Picture[] = [
  { file: "desk-light", role: "reviewer", path: "/desk", theme: "light", ready: "[data-case-id] h2" },
  { file: "desk-dark", role: "reviewer", path: "/desk", theme: "dark", ready: "[data-case-id] h2" },
  { file: "floor", role: "supervisor", path: "/floor", theme: "light", ready: "h1" },
  { file: "policy", role: "risk_manager", path: "/policy", theme: "light", ready: "h1" },
  { file: "losses", role: "risk_manager", path: "/losses", theme: "light", ready: "h1" },
  { file: "trail", role: "auditor", path: "/trail", theme: "light", ready: "h1" },
  { file: "intake", role: "supervisor", path: "/intake", theme: "light", ready: "h1" },
];

const browser = await chromium.launch(CHROMIUM);
try {
  for (const picture of PICTURES) await take(browser, picture);
} finally {
  await browser.close();
}

async function take(browser: Browser, { file, role, path, theme, ready }: Picture): Promise<void> {
  const context = await browser.newContext({
    baseURL: address,
    viewport: { width: 1280, height: 800 },
    colorScheme: theme,
    locale: "en-GB",
    timezoneId: "Europe/Dublin",
    reducedMotion: "reduce",
  });
  const page = await context.newPage();
  await signIn(page, role);
  await page.goto(path);
  await page.locator(ready).first().waitFor();
  // The live stream never ends, so the network is never idle; what is on screen has had its time.
  await page.waitForTimeout(1_500);
  await page.screenshot({ path: `e2e/tour/${file}.png` });
  console.log(`${file}.png`);
  await context.close();
}

async function signIn(page: Page, role: Role): Promise<void> {
  const { email, password } = demoPerson(role);
  const form = new SignInPage(page);
  await form.open();
  await form.enter(email, password);
  await page.waitForURL((url) => url.pathname !== "/sign-in");
}
