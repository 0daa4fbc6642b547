import AxeBuilder from "@axe-core/playwright";
import { expect, type Page } from "@playwright/test";

const WIDTHS = [1280, 360];
const THEMES = ["light", "dark"] as const;

/**
 * WCAG 2.2 A and AA as far as a machine can tell, and nothing that sticks out sideways, in every look of a page or of
 * one part of it.
 */
export async function expectAccessible(page: Page, part = "html"): Promise<void> {
  for (const width of WIDTHS) {
    await page.setViewportSize({ width, height: 800 });
    for (const colorScheme of THEMES) {
      await page.emulateMedia({ colorScheme, reducedMotion: "reduce" });
      await expect(page.locator("html")).toHaveAttribute("data-theme", colorScheme);
      expect(await violations(page, part), `axe at ${width} px, ${colorScheme}`).toEqual([]);
    }
    const overhang = await page.evaluate(
      () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
    );
    expect(overhang, `what is wider than ${width} px`).toBe(0);
  }
}

async function violations(page: Page, part: string): Promise<string[]> {
  const tags = ["wcag2a", "wcag2aa", "wcag21a", "wcag21aa", "wcag22aa"];
  const found = await new AxeBuilder({ page }).include(part).withTags(tags).analyze();
  return found.violations.flatMap(({ id, nodes }) =>
    nodes.map(({ target, failureSummary }) => `${id} at ${target.join(" ")}: ${failureSummary}`),
  );
}
