import { type BrowserContextOptions, test as base, expect, type Page } from "@playwright/test";
import { createDatabase, type Database } from "@/db/client";
import { TEST_PASSWORD } from "@/tests/support/people";
import { Office, type Person } from "./office";
import { running } from "./running";
import { Complaints } from "./watch";

type Fixtures = {
  office: Office;
  /** Whatever the consoles of this test's browsers complain of fails the test. */
  complaints: Complaints;
  /** A browser of somebody's own, signed in without the form. */
  openAs: (
    person: Pick<Person, "email">,
    options?: BrowserContextOptions & { password?: string },
  ) => Promise<Page>;
};

export const test = base.extend<Fixtures, { db: Database }>({
  db: [
    // biome-ignore lint/correctness/noEmptyPattern: Playwright reads the fixtures wanted from the pattern
    async ({}, use) => {
      const { db, close } = createDatabase(running().databaseUrl, 2);
      await use(db);
      await close();
    },
    { scope: "worker" },
  ],
  office: async ({ db, playwright, baseURL }, use) => {
    const request = await playwright.request.newContext({ baseURL: baseURL ?? "" });
    await use(new Office(db, request));
    await request.dispose();
  },
  complaints: [
    async ({ context }, use) => {
      const complaints = new Complaints();
      complaints.listenTo(context);
      await use(complaints);
      expect(complaints.unexpected, "what the console complained of").toEqual([]);
    },
    { auto: true },
  ],
  openAs: async ({ browser, complaints }, use) => {
    const opened: Page[] = [];
    await use(async ({ email }, { password = TEST_PASSWORD, ...options } = {}) => {
      const context = await browser.newContext(options);
      complaints.listenTo(context);
      const page = await context.newPage();
      opened.push(page);
      const csrf = await page.request.get("/api/auth/csrf");
      const { csrfToken } = (await csrf.json()) as { csrfToken: string };
      const form = { email, password, csrfToken, json: "true" };
      const answer = await page.request.post("/api/auth/callback/credentials", { form });
      expect(answer.ok(), `signing ${email} in answered ${answer.status()}`).toBe(true);
      return page;
    });
    for (const page of opened) await page.context().close();
  },
});

export { expect };
