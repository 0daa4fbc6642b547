import { expect, type Locator, type Page } from "@playwright/test";

/** Presses keys one after the other. */
export async function press(page: Page, ...keys: string[]): Promise<void> {
  for (const key of keys) await page.keyboard.press(key);
}

const MOST_STOPS = 400;

/** Goes to a control as somebody without a mouse does: by Tab, from wherever the focus is. */
export async function tabTo(target: Locator, key: "Tab" | "Shift+Tab" = "Tab"): Promise<void> {
  await expect(target).toBeVisible();
  for (let stop = 0; stop < MOST_STOPS; stop++) {
    if (await target.evaluate((element) => element === document.activeElement)) return;
    await target.page().keyboard.press(key);
  }
  throw new Error(`${target} is not reached by ${MOST_STOPS} presses of ${key}`);
}

/** Lets a test say at its end that no pointer was used, not even by mistake. */
export async function countPointerUse(page: Page): Promise<() => Promise<number>> {
  await page.addInitScript(() => {
    const count = () =>
      sessionStorage.setItem("pointer", String(Number(sessionStorage.getItem("pointer")) + 1));
    for (const name of ["pointerdown", "mousedown", "touchstart", "wheel"])
      window.addEventListener(name, count, true);
  });
  return () => page.evaluate(() => Number(sessionStorage.getItem("pointer") ?? 0));
}
