import { mkdtempSync, rmSync, statSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { afterAll, expect, test } from "vitest";
import { appEnvironment, checkEnvironment, portFrom } from "../../db/server/environment.mjs";
import { keptSecret } from "../../db/server/secrets.mjs";

const folder = mkdtempSync(path.join(tmpdir(), "cupel-settings-"));
afterAll(() => rmSync(folder, { recursive: true }));

const services = {
  folder,
  port: 4100,
  databaseUrl: "mysql://a:b@127.0.0.1:1/c",
  smtpUrl: "smtp://127.0.0.1:2",
};
const noSettings = { NODE_ENV: "test", PATH: "/bin", TZ: "Asia/Tokyo" } as const;

test("a secret is made once, kept for its owner alone, and another one for another name", () => {
  const secret = keptSecret(folder, "one");
  expect(secret).toMatch(/^[0-9a-f]{64}$/);
  expect(keptSecret(folder, "one")).toBe(secret);
  expect(keptSecret(folder, "other")).not.toBe(secret);
  expect(statSync(path.join(folder, "secrets", "one")).mode & 0o777).toBe(0o600);
});

test("where the person sets nothing, the app gets the kept secret, its own address and the demo", () => {
  const env = appEnvironment({ env: noSettings, ...services });
  const secret = keptSecret(folder, "auth");
  expect(env).toMatchObject({
    PORT: "4100",
    DATABASE_URL: services.databaseUrl,
    SMTP_URL: services.smtpUrl,
    AUTH_SECRET: secret,
    NEXTAUTH_SECRET: secret,
    APP_URL: "http://localhost:4100",
    NEXTAUTH_URL: "http://localhost:4100",
    CUPEL_DEMO: "1",
    TZ: "Asia/Tokyo",
  });
});

test("the person's own settings win, and an outside database gets no demo data unasked", () => {
  const given = {
    ...noSettings,
    AUTH_SECRET: "s".repeat(32),
    APP_URL: "https://desk.test",
    DATABASE_URL: "mysql://x",
  };
  const env = appEnvironment({ env: given, ...services });
  expect(env).toMatchObject({
    AUTH_SECRET: "s".repeat(32),
    NEXTAUTH_URL: "https://desk.test",
    CUPEL_DEMO: "0",
  });
  expect(appEnvironment({ env: { ...given, CUPEL_DEMO: "1" }, ...services }).CUPEL_DEMO).toBe("1");
});

test("checks see none of the person's settings, but keep the rest of the environment", () => {
  const given = {
    ...noSettings,
    DATABASE_URL: "mysql://theirs",
    SMTP_URL: "smtp://theirs",
    CUPEL_DATA_DIR: "/theirs",
    CUPEL_STREAM: "/a.csv",
    NEXTAUTH_URL: "https://theirs",
    PORT: "80",
  };
  expect(checkEnvironment(given)).toEqual({
    PATH: "/bin",
    TZ: "Asia/Tokyo",
    CUPEL_STREAM: "/a.csv",
    CUPEL_BUILD_DIR: ".next-test",
    NEXT_TELEMETRY_DISABLED: "1",
  });
});

test.each([
  [undefined, 3000],
  ["", 3000],
  ["8080", 8080],
  ["0", undefined],
  ["65536", undefined],
  ["80.5", undefined],
  ["web", undefined],
])("PORT=%s is port %s", (given, port) => {
  expect(portFrom({ ...noSettings, PORT: given })).toBe(port);
});
