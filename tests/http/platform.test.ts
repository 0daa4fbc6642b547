import { Validator } from "@seriousme/openapi-schema-validator";
import { afterAll, expect, inject, test } from "vitest";
import { createDatabase } from "@/db/client";
import { addKey } from "@/lib/keys/add";
import { newId } from "@/lib/new-id";
import { contextOf, makePerson } from "../support/people";

const { url } = inject("app");
const { db, close } = createDatabase(inject("mariadb").url);
afterAll(close);
const get = (path: string, headers: Record<string, string> = {}) => fetch(new URL(path, url), { headers });

test("the process says that it lives, and that database, migrations, installation and mail are there", async () => {
  const live = await get("/api/health/live");
  expect([live.status, await live.json()]).toEqual([200, { live: true }]);
  const ready = await get("/api/health/ready");
  expect([ready.status, await ready.json()]).toEqual([
    200,
    { database: true, migrations: true, installed: true, mail: true },
  ]);
});

test("a key with reports:read reads the figures; they count calls by pattern, not by address", async () => {
  const ctx = contextOf(db, await makePerson(db, ["administrator"]));
  const { secret } = await addKey(ctx, { name: newId(), source: "figures", scopes: ["reports:read"] });
  const id = newId();
  await get(`/api/cases/${id}`);
  const response = await get("/api/metrics", { Authorization: `Bearer ${secret}` });
  expect(response.status).toBe(200);
  expect(response.headers.get("Content-Type")).toMatch(/^text\/plain/);
  const text = await response.text();
  expect(text).toContain('cupel_http_request_seconds_count{route="GET /api/cases/{id}",status="401"}');
  expect(text).not.toContain(id);
  for (const name of ["cupel_cases", "cupel_decisions", "nodejs_eventloop_lag_seconds"]) {
    expect(text).toContain(`# TYPE ${name} `);
  }
});

test("the API describes itself in a valid OpenAPI 3.1 document, open to everybody", async () => {
  const response = await get("/api/openapi.json");
  expect(response.headers.get("Content-Type")).toBe("application/json");
  const document = (await response.json()) as { openapi: string; servers: { url: string }[] };
  expect(document.openapi).toBe("3.1.0");
  expect(document.servers).toEqual([{ url: new URL(url).origin }]);
  expect((await new Validator().validate(document)).valid).toBe(true);
});
