import { expect, type Locator, type Page } from "@playwright/test";
import { press } from "./keyboard";
import { textOf } from "./text";

export type InHand = { caseId: string; number: number };

/** The Desk as a person at it sees it. */
export class DeskPage {
  readonly hand: Locator;
  readonly heading: Locator;
  readonly note: Locator;
  readonly status: Locator;
  readonly list: Locator;
  readonly dialog: Locator;

  constructor(readonly page: Page) {
    this.hand = page.locator("[data-case-id]");
    this.heading = page.getByRole("heading", { level: 2, name: /^Case \d+/ });
    this.note = page.getByRole("textbox", { name: "Note", exact: true });
    this.status = page.getByRole("status").last();
    this.list = page.getByRole("grid", { name: "Waiting cases in order of rank" });
    this.dialog = page.getByRole("dialog");
  }

  async open(caseId?: string): Promise<InHand> {
    await this.page.goto(caseId ? `/desk?case=${caseId}` : "/desk");
    return this.inHand();
  }

  /** Waits for a case in hand that has the focus, as after every act of the person. */
  async inHand(): Promise<InHand> {
    await expect(this.heading).toBeFocused();
    const caseId = await this.hand.getAttribute("data-case-id");
    const number = Number((await textOf(this.heading.locator("span").first())).replace("Case ", ""));
    return { caseId: caseId as string, number };
  }

  /** Presses Enter on a finding and waits for the case that follows. */
  async commit(from: InHand): Promise<InHand> {
    await this.settle();
    await press(this.page, "Enter");
    return this.nextAfter(from);
  }

  async nextAfter(before: InHand): Promise<InHand> {
    await expect(this.hand).not.toHaveAttribute("data-case-id", before.caseId);
    return this.inHand();
  }

  async backInHand({ caseId }: InHand): Promise<InHand> {
    await expect(this.hand).toHaveAttribute("data-case-id", caseId);
    return this.inHand();
  }

  /** Enter is dead for a moment after a case appears. */
  async settle(): Promise<void> {
    await this.page.waitForTimeout(450);
  }

  stop(name: RegExp | string): Locator {
    return this.page.getByRole("radio", { name });
  }

  row(number: number): Locator {
    return this.list.getByRole("row").filter({ has: this.page.getByText(String(number), { exact: true }) });
  }

  /** Only the rows in view are drawn: rolls the list on until this case is among them. */
  async scrollTo(number: number): Promise<void> {
    await this.list.hover();
    await expect(async () => {
      if (await this.row(number).isVisible()) return;
      await this.page.mouse.wheel(0, 300);
      await expect(this.row(number)).toBeVisible({ timeout: 200 });
    }).toPass();
  }

  /** Case numbers as the list shows them from the top. */
  async shownNumbers(): Promise<number[]> {
    const rows = await this.list.getByRole("row").allTextContents();
    return rows.slice(1).map((text) => Number.parseInt(text, 10));
  }
}
