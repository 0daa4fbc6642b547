import type { BrowserContext } from "@playwright/test";

/** A Desk learns so that another test's supervisor has given a case of its to somebody else. */
const NEWS = /\/api\/cases\/[0-9a-f-]{36}$/;

/** What the browser's console said on any page of a context that it should not have said. */
export class Complaints {
  private readonly heard: string[] = [];
  private readonly expected: RegExp[] = [];

  listenTo(context: BrowserContext): void {
    context.on("console", (message) => {
      const { url } = message.location();
      const isNews = NEWS.test(url) && message.text().includes("status of 403");
      if (["error", "warning"].includes(message.type()) && !isNews) this.hear(`${message.text()} (${url})`);
    });
    context.on("weberror", (error) => this.hear(String(error.error())));
  }

  /** A refusal that the test provokes: Chromium reports every answer of 400 and above as an error. */
  expectStatus(...statuses: number[]): void {
    for (const status of statuses) this.expect(new RegExp(`responded with a status of ${status}\\b`));
  }

  /** Anything else that the test provokes. */
  expect(words: RegExp): void {
    this.expected.push(words);
  }

  get unexpected(): readonly string[] {
    return this.heard;
  }

  private hear(text: string): void {
    if (!this.expected.some((words) => words.test(text))) this.heard.push(text);
  }
}
