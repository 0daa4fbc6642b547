import type { Locator, Page } from "@playwright/test";

/** The form that asks for e-mail and password, on its own page or over another. */
export class SignInPage {
  readonly newPassword: Locator;

  constructor(private readonly page: Page) {
    this.newPassword = page.getByLabel("New password");
  }

  async open(): Promise<void> {
    await this.page.goto("/sign-in");
  }

  async enter(email: string, password: string, button = "Sign in"): Promise<void> {
    await this.page.getByLabel("E-mail").fill(email);
    await this.page.getByLabel("Password", { exact: true }).fill(password);
    await this.submit(button);
  }

  async submit(button: string): Promise<void> {
    await this.page.getByRole("button", { name: button, exact: true }).click();
  }
}

export const menuLinks = (page: Page): Locator =>
  page.getByRole("navigation", { name: "Pages" }).getByRole("link");
