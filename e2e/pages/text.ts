import type { Locator } from "@playwright/test";

export async function textOf(of: Locator): Promise<string> {
  return (await of.textContent()) ?? "";
}
