import type { Locator, Page } from "@playwright/test";

export async function textOf(of: Locator): Promise<string> {
  return (await of.textContent()) ?? "";
}

/** What the page says went wrong; Next's own announcer of pages has the same role. */
export function alertOn(of: Page | Locator): Locator {
  return of.locator('[role="alert"]:not(#__next-route-announcer__)');
}
