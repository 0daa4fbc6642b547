import { mkdtempSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { defineConfig, devices } from "@playwright/test";
import { freePort } from "./db/server/ports.mjs";
import { CHROMIUM } from "./e2e/support/chromium";

// Workers load this file again: what the first load chose reaches them through the environment.
process.env.CUPEL_E2E_PORT ??= String(await freePort());
process.env.CUPEL_E2E_DATA ??= mkdtempSync(path.join(tmpdir(), "cupel-e2e-"));

const port = process.env.CUPEL_E2E_PORT;
const baseURL = `http://localhost:${port}`;

export default defineConfig({
  testDir: "e2e",
  outputDir: "test-results",
  // Maps `@/` and stands in for `server-only`, as for commands.
  tsconfig: "db/commands/tsconfig.json",
  workers: 2,
  retries: 0,
  forbidOnly: true,
  timeout: 60_000,
  expect: { timeout: 10_000 },
  reporter: "list",
  use: {
    ...devices["Desktop Chrome"],
    baseURL,
    locale: "en-GB",
    timezoneId: "Europe/Vienna",
    trace: "retain-on-failure",
    screenshot: "only-on-failure",
    launchOptions: CHROMIUM,
  },
  webServer: {
    command: `exec node db/commands/start.mjs --throw-away ${process.env.CUPEL_E2E_DATA}`,
    url: `${baseURL}/api/health/ready`,
    timeout: 240_000,
    gracefulShutdown: { signal: "SIGTERM", timeout: 30_000 },
    stdout: "pipe",
    env: { PORT: port },
  },
});
