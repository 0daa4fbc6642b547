import type { Page } from "@playwright/test";
import { rolesMay } from "@/lib/auth/access";
import { ROLES, type Role } from "@/lib/auth/codes";
import { PAGES, type PagePath } from "@/lib/auth/pages";
import { newId } from "@/lib/new-id";
import { expectAccessible } from "./pages/accessibility";
import { DeskPage } from "./pages/desk";
import { press, tabTo } from "./pages/keyboard";
import type { Office } from "./support/office";
import { suspiciousPayments } from "./support/payments";
import { findDecision } from "./support/records";
import { expect, test } from "./support/test";

/** The page that "/" leads to has a test of its own. */
const paths = (Object.keys(PAGES) as PagePath[]).filter((path) => path !== "/");

type Sample = {
  /** Where the first role that may see such a page does not see every one. */
  role?: Role;
  /** @returns what stands in the place of `[id]` or `[token]` */
  make: (office: Office, page: Page) => Promise<string>;
};

/** A new page with such a place in its path needs a line here. */
const SAMPLES: Partial<Record<PagePath, Sample>> = {
  "/cases/[id]": {
    make: async (office) => {
      const [opened] = await office.openCases(suspiciousPayments(2));
      return opened?.caseId as string;
    },
  },
  "/trail/decisions/[id]": {
    role: "auditor",
    make: async (office) => {
      const [opened] = await office.openCases(suspiciousPayments(2), await office.person("supervisor"));
      if (!opened) throw new Error("Cases were opened");
      await office.decide(opened, "fraudulent", "details_theft");
      return (await findDecision(office.db, opened.caseId))?.id as string;
    },
  },
  "/intake/[id]": {
    make: async (_office, page) => {
      const lines =
        "externalId,occurredAt,amount,currency,channel,accountId,counterpartyId\nA,yesterday,1,EUR,cheque,B,C";
      const file = { name: "one.csv", mimeType: "text/csv", buffer: Buffer.from(lines) };
      await page.goto("/intake");
      const headers = { "Idempotency-Key": newId(), Origin: new URL(page.url()).origin };
      const answer = await page.request.post("/api/imports", { multipart: { file }, headers });
      expect(answer.status(), await answer.text()).toBe(202);
      return ((await answer.json()) as { id: string }).id;
    },
  },
  "/unsubscribe/[token]": { make: async () => newId() },
};

/** A role that may see the page; null where anybody may. */
function roleFor(path: PagePath): Role | null {
  const { may } = PAGES[path];
  if (may === "anyone") return null;
  const role = SAMPLES[path]?.role ?? ROLES.find((each) => rolesMay([each], may));
  if (!role) throw new Error(`No role may see ${path}`);
  return role;
}

async function addressOf(path: PagePath, office: Office, page: Page): Promise<string> {
  if (!path.includes("[")) return path;
  const sample = SAMPLES[path];
  if (!sample) throw new Error(`${path} needs a sample in this file`);
  return path.replace(/\[\w+\]/, await sample.make(office, page));
}

async function settled(page: Page): Promise<void> {
  await expect(page.getByRole("heading", { level: 1 })).toHaveCount(1);
  await expect(page.locator(".motion-safe\\:animate-pulse")).toHaveCount(0);
}

// Four times over every element of a page: long on a page of long tables.
test.slow();
test.describe.configure({ mode: "parallel" });

for (const path of paths) {
  test(`${path} can be used by everybody, in both themes, on a wide and a narrow screen`, async ({
    page: signedOut,
    office,
    openAs,
  }) => {
    const role = roleFor(path);
    const page = role ? await openAs(await office.person(role)) : signedOut;
    await page.goto(await addressOf(path, office, page));
    await settled(page);
    await expectAccessible(page);
  });
}

test.describe("what opens over a page can be used by everybody, too", () => {
  const dialogs = { "?": "Shortcuts", q: "Escalate case", a: "Set case" };
  for (const [key, title] of Object.entries(dialogs)) {
    test(`the Desk's “${title}”`, async ({ office, openAs }) => {
      const person = await office.person("reviewer");
      await office.openCases(suspiciousPayments(2), person);
      const page = await openAs(person);
      const desk = new DeskPage(page);
      await desk.open();
      await press(page, key);
      await expect(desk.dialog.getByRole("heading", { name: title })).toBeVisible();
      await expectAccessible(page, "[role=dialog]");
    });
  }

  test("what each signal on the Desk looks at, without a mouse", async ({ office, openAs }) => {
    const person = await office.person("reviewer");
    await office.openCases(suspiciousPayments(2), person);
    const page = await openAs(person);
    const desk = new DeskPage(page);
    const hand = await desk.open();
    await tabTo(page.getByText("Show as table"), "Shift+Tab");
    await press(page, "Enter");
    const table = page.getByRole("table", { name: "What the evidence is made of" });
    await expect(table.getByRole("columnheader")).toHaveText([
      "Signal",
      "Reading",
      "What it means",
      "Decibans",
    ]);
    await expect(table.getByRole("row").filter({ hasText: "Total" })).toContainText("Sum of the lines above");
    await expect(desk.hand).toHaveAttribute("data-case-id", hand.caseId);
    await expectAccessible(page, "section[aria-label=Balance]");
  });

  test("the form that proposes a policy", async ({ office, openAs }) => {
    const page = await openAs(await office.person("supervisor"));
    await page.goto("/policy?propose=newest");
    await page.getByRole("textbox", { name: "Wished cases a day" }).fill("many");
    await page.getByRole("button", { name: "Propose", exact: true }).click();
    await expectAccessible(page);
  });

  test("a sign-in that was refused", async ({ page, complaints }) => {
    complaints.expectStatus(401);
    await page.goto("/sign-in");
    await page.getByLabel("E-mail").fill("nobody@example.test");
    await page.getByLabel("Password", { exact: true }).fill("no such person");
    await press(page, "Enter");
    await expect(page.getByText(/do not fit together/)).toBeVisible();
    await expectAccessible(page);
  });

  test("the page that is none, and the page that is not for one's role", async ({
    office,
    openAs,
    complaints,
  }) => {
    complaints.expectStatus(403, 404);
    const page = await openAs(await office.person("auditor"));
    for (const path of ["/nothing-here", "/desk"]) {
      await page.goto(path);
      await settled(page);
      await expectAccessible(page);
    }
  });
});
