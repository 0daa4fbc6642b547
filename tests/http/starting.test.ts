import { connect } from "node:net";
import { createConnection } from "mysql2/promise";
import { afterAll, beforeAll, expect, inject, test } from "vitest";
import { createDatabase } from "@/db/client";
import { migrateDatabase } from "@/db/migrate";
import { newId } from "@/lib/new-id";
import { type RunningApp, startApp } from "../support/app";
import { makePerson, TEST_PASSWORD } from "../support/people";
import { CookieJar, sendSignIn, signedIn } from "../support/session";

/** A further process whose database has not been migrated yet, as at a first start. */
const schema = `cupel_t_${newId().slice(-12)}`;
const inSchema = (address: string) => Object.assign(new URL(address), { pathname: `/${schema}` }).href;
let late: RunningApp;

beforeAll(async () => {
  const shared = inject("app");
  await onServer(`CREATE DATABASE ${schema}`);
  late = await startApp({
    beside: { ...shared, databaseUrl: inSchema(shared.databaseUrl) },
    untilInstalled: false,
    env: { CUPEL_SIGN_INS_PER_MINUTE: "3", CUPEL_TRUSTED_PROXIES: "1" },
  });
});

afterAll(async () => {
  await late.stop();
  await onServer(`DROP DATABASE ${schema}`);
});

async function onServer(statement: string): Promise<void> {
  const connection = await createConnection(inject("app").ownerUrl);
  await connection.query(statement);
  await connection.end();
}

const ask = (path: string) => fetch(new URL(path, late.url));

test("until the installation is there the API says so and when to ask again; then it answers", async () => {
  expect((await ask("/api/health/live")).status).toBe(200);
  expect((await ask("/api/openapi.json")).status).toBe(200);
  const readiness = await ask("/api/health/ready");
  expect([readiness.status, await readiness.json()]).toEqual([
    503,
    { database: true, migrations: false, installed: false, mail: true },
  ]);
  for (const path of ["/api/queue", "/api/profile", "/api/metrics"]) {
    const response = await ask(path);
    expect(response.status).toBe(503);
    expect(response.headers.get("Retry-After")).toBe("5");
    expect(response.headers.get("Content-Type")).toBe("application/problem+json");
    expect(await response.json()).toMatchObject({ status: 503, code: "unavailable" });
  }
  await migrateDatabase(inSchema(inject("app").ownerUrl));
  await expect.poll(async () => (await ask("/api/profile")).status, { timeout: 60_000 }).toBe(401);
});

test("a caller that leaves in the middle of its request is no fault of ours", async () => {
  const { db, close } = createDatabase(late.databaseUrl);
  const { email } = await makePerson(db, ["supervisor"]);
  await close();
  const jar = await signedIn(late.url, email, TEST_PASSWORD);
  const { hostname, port, host, origin } = new URL(late.url);
  const socket = connect(Number(port), hostname);
  const head = [
    "PUT /api/profile/time-zone HTTP/1.1",
    `Host: ${host}`,
    `Origin: ${origin}`,
    `Cookie: ${jar.header}`,
    "Content-Type: application/json",
    "Content-Length: 5000",
    "Expect: 100-continue",
  ];
  socket.write(`${head.join("\r\n")}\r\n\r\n`);
  // The server has the head, and asks for a body that never comes whole.
  await new Promise((resolve) => socket.once("data", resolve));
  socket.write('{"timeZone": ');
  socket.destroy();
  const logged = () =>
    late
      .output()
      .split("\n")
      .filter((line) => line.includes("PUT /api/profile/time-zone"));
  await expect.poll(logged, { timeout: 30_000 }).toHaveLength(1);
  expect(JSON.parse(logged()[0] ?? "")).toMatchObject({ level: 30, status: 499 });
  expect(late.output()).not.toContain("A request failed");
});

test("an invented X-Forwarded-For gets nobody past the limit of sign-ins, and costs nobody else theirs", async () => {
  const tryAs = async (forwarded: string) => {
    const jar = new CookieJar();
    const headers = { "X-Forwarded-For": forwarded };
    const answer = await sendSignIn(
      late.url,
      jar,
      { email: "x@cupel.test", password: TEST_PASSWORD },
      headers,
    );
    return answer.text();
  };
  for (let n = 0; n < 3; n++) expect(await tryAs(`192.0.2.${n}, 203.0.113.9`)).not.toContain("too_many");
  expect(await tryAs("192.0.2.77, 203.0.113.9")).toContain("too_many");
  expect(await tryAs("192.0.2.77, 203.0.113.10")).not.toContain("too_many");
});
