import { spawn } from "node:child_process";
import { randomBytes } from "node:crypto";
import { once } from "node:events";
import { eq, sql } from "drizzle-orm";
import pino from "pino";
import { beforeAll, describe, expect, inject, test, vi } from "vitest";
import { createDatabase } from "@/db/client";
import { jobRuns } from "@/db/schema/cases";
import { idempotencyKeys } from "@/db/schema/people";
import { policies } from "@/db/schema/policies";
import { faultOf } from "@/lib/fault";
import { type Job, slotOfMinutes } from "@/lib/job";
import { forgetOldRows } from "@/lib/jobs/housekeeping";
import { prepareInstallation } from "@/lib/jobs/prepare";
import { JOBS } from "@/lib/jobs/registry";
import { runJob } from "@/lib/jobs/run-job";
import { startScheduler } from "@/lib/jobs/scheduler";
import { log } from "@/lib/log";
import { problemResponse } from "@/lib/problem";
import { signalled } from "../support/signalled";
import { testWorld, WORLD_START, type World } from "../support/world";

let world: World;
beforeAll(async () => {
  world = await testWorld();
  Object.assign(process.env, {
    DATABASE_URL: world.url,
    SMTP_URL: inject("smtpUrl"),
    AUTH_SECRET: "a secret of the tests, 32 letters or more",
  });
});

const never = new AbortController().signal;
const at = (now = WORLD_START) => ({ db: world.db, now: () => now });
const job = (name: string, run: Job["run"], slot: Job["slot"] = slotOfMinutes(15)): Job => ({
  name,
  everyMs: 1,
  slot,
  run,
});
const runsOf = (name: string) => world.db.select().from(jobRuns).where(eq(jobRuns.job, name));

describe("a job with time slots", () => {
  test("runs once per slot, however many servers try at the same moment", async () => {
    let runs = 0;
    const counted = job("counted", async () => {
      runs += 1;
    });
    const servers = Array.from({ length: 4 }, () => createDatabase(world.url, 4));
    try {
      const race = servers.flatMap(({ db }) =>
        Array.from({ length: 5 }, () => runJob({ db, now: () => WORLD_START }, counted, never)),
      );
      const results = await Promise.all(race);
      expect(results.filter((result) => result === "done")).toHaveLength(1);
      expect(results.filter((result) => result === "taken")).toHaveLength(19);
    } finally {
      await Promise.all(servers.map((server) => server.close()));
    }
    expect(runs).toBe(1);
    expect(await runsOf("counted")).toMatchObject([{ slot: "2026-03-02T09:00:00.000Z", problem: null }]);
    const nextSlot = new Date(WORLD_START.getTime() + 15 * 60_000);
    expect(await runJob(at(nextSlot), counted, never)).toBe("done");
    expect(runs).toBe(2);
  });

  test("runs once for two processes of their own", async () => {
    const servers = [1, 2].map(() =>
      spawn(process.execPath, ["--import", "tsx", "tests/jobs/one-run.ts", world.url], {
        env: { ...process.env, TSX_TSCONFIG_PATH: "db/commands/tsconfig.json" },
        stdio: ["ignore", "pipe", "pipe"],
      }),
    );
    const outputs = await Promise.all(
      servers.map(async (server) => {
        let output = "";
        let errors = "";
        server.stdout.on("data", (chunk) => {
          output += chunk;
        });
        server.stderr.on("data", (chunk) => {
          errors += chunk;
        });
        const [code] = await once(server, "close");
        if (code !== 0) throw new Error(errors);
        return output.trim();
      }),
    );
    expect(outputs.toSorted()).toEqual(["done", "taken"]);
    expect(await runsOf("two-processes")).toHaveLength(1);
  });

  test("keeps what went wrong with its slot, without the text of a query", async () => {
    const broken = job("broken", async (ctx) => {
      await ctx.db.insert(jobRuns).values({ job: "x".repeat(100), slot: "secret", startedAt: WORLD_START });
    });
    expect(await runJob(at(), broken, never)).toBe("failed");
    const [row] = await runsOf("broken");
    expect(row?.finishedAt).toEqual(WORLD_START);
    expect(row?.problem).toMatch(/the log has it under [0-9a-f-]{36}$/);
  });
});

test("what a log may say of a fault leaves out the values of a failed query", async () => {
  const failed = await world.db
    .insert(jobRuns)
    .values({ job: "x".repeat(100), slot: "a secret value", startedAt: WORLD_START })
    .catch((error: unknown) => faultOf(error));
  expect(failed).toMatchObject({ name: "Error", message: null, errno: 1406 });
  expect(JSON.stringify(failed)).not.toContain("a secret value");
  expect(faultOf(new RangeError("There is no such ISO week"))).toMatchObject({
    name: "RangeError",
    message: "There is no such ISO week",
  });
});

test("a request that fails by a query leaves the query's values out of the log and the answer", async () => {
  const failure = await world.db
    .insert(jobRuns)
    .values({ job: "x".repeat(100), slot: "a secret value", startedAt: WORLD_START })
    .catch((error: unknown) => error);
  const lines: string[] = [];
  const stream: { write: (line: string) => void } = Reflect.get(log, pino.symbols.streamSym);
  const write = vi.spyOn(stream, "write").mockImplementation((line) => void lines.push(line));
  const { level } = log;
  log.level = "error";
  const response = problemResponse(failure, "request-1");
  log.level = level;
  write.mockRestore();
  expect(lines.join("")).toContain("request-1");
  expect(lines.join("")).toContain('"errno":1406');
  expect(lines.join("")).not.toContain("a secret value");
  expect(await response.text()).not.toContain("a secret value");
});

describe("the scheduler", () => {
  test("runs each job again and again, never beside itself, and stops after the one that runs", async () => {
    let running = 0;
    let most = 0;
    let runs = 0;
    const enough = signalled();
    const busy = job(
      "busy",
      async () => {
        running += 1;
        most = Math.max(most, running);
        await new Promise((resolve) => setTimeout(resolve, 2));
        running -= 1;
        runs += 1;
        if (runs === 5) enough.resolve();
      },
      null,
    );
    const scheduler = startScheduler(at(), [busy]);
    await enough.promise;
    await scheduler.stop();
    const atStop = runs;
    expect(running).toBe(0);
    expect(most).toBe(1);
    await new Promise((resolve) => setTimeout(resolve, 20));
    expect(runs).toBe(atStop);
  });

  test("tells a running job to end, and waits for it", async () => {
    const started = signalled();
    let ended = false;
    const long = job(
      "long",
      async (_ctx, signal) => {
        started.resolve();
        await new Promise((resolve) => signal.addEventListener("abort", resolve));
        ended = true;
      },
      null,
    );
    const scheduler = startScheduler(at(), [long]);
    await started.promise;
    await scheduler.stop();
    expect(ended).toBe(true);
  });

  test("goes on after a job that failed", async () => {
    let runs = 0;
    const again = signalled();
    const flaky = job(
      "flaky",
      async () => {
        runs += 1;
        if (runs === 3) again.resolve();
        throw new Error("not today");
      },
      null,
    );
    const scheduler = startScheduler(at(), [flaky]);
    await again.promise;
    await scheduler.stop();
    expect(runs).toBeGreaterThanOrEqual(3);
  });

  test("has no two jobs of one name", () => {
    expect(() => startScheduler(at(), [...JOBS, ...JOBS])).toThrow("same name");
    expect(new Set(JOBS.map(({ name }) => name)).size).toBe(JOBS.length);
  });
});

test("idempotency keys are forgotten after a day and job runs after a quarter, and not before", async () => {
  const now = new Date("2026-09-01T12:00:00Z");
  const ago = (hours: number) => new Date(now.getTime() - hours * 3_600_000);
  const key = { actor: "key:1", requestHash: Buffer.alloc(32) };
  await world.db.insert(idempotencyKeys).values([
    { ...key, key: "old", createdAt: ago(24.01) },
    { ...key, key: "young", createdAt: ago(23.99) },
  ]);
  await world.db.insert(jobRuns).values([
    { job: "kept", slot: "1", startedAt: ago(24 * 89) },
    { job: "kept", slot: "2", startedAt: ago(24 * 91) },
  ]);
  await forgetOldRows(world.db, now);
  const keys = await world.db.select({ key: idempotencyKeys.key }).from(idempotencyKeys);
  expect(keys).toEqual([{ key: "young" }]);
  expect((await runsOf("kept")).map(({ slot }) => slot)).toEqual(["1"]);
});

test("an installation is prepared once, whoever starts first, and not at all on a database without its schema", async () => {
  const ctx = { ...world.ctx({ kind: "system", job: "start" }) };
  await Promise.all([prepareInstallation(ctx), prepareInstallation(ctx)]);
  const policiesThere = await world.db.select({ id: policies.id }).from(policies);
  expect(policiesThere).toHaveLength(1);
  const name = `cupel_t_${randomBytes(6).toString("hex")}`;
  const owner = createDatabase(world.ownerUrl, 1);
  const empty = createDatabase(Object.assign(new URL(world.url), { pathname: `/${name}` }).href, 1);
  try {
    await owner.db.execute(sql.raw(`create database ${name}`));
    await expect(prepareInstallation({ ...ctx, db: empty.db })).rejects.toThrow("has not been migrated");
  } finally {
    await empty.close();
    await owner.db.execute(sql.raw(`drop database ${name}`));
    await owner.close();
  }
});
