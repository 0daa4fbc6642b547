import { spawn } from "node:child_process";
import { once } from "node:events";
import path from "node:path";
import { eq } from "drizzle-orm";
import { expect, test } from "vitest";
import { trailHead } from "@/db/schema/trail";
import { importChunks, imports, transactions } from "@/db/schema/transactions";
import type { Context } from "@/lib/context";
import { importJobs } from "@/lib/imports/jobs";
import { type ClaimedImport, claimImport, LostLease } from "@/lib/imports/lease";
import { runImport } from "@/lib/imports/run";
import { signalled } from "../support/signalled";
import { testWorld, WORLD_START } from "../support/world";
import { csv, gzip, row, rows, shown, upload } from "./uploads";

const BATCH = 200;
/** Several batches, and the beginning of another. */
const ROWS = 1_030;

const world = await testWorld();
const { db } = world;
const supervisor = world.ctx(await world.person("supervisor"));
const runner = (at?: Date) => world.ctx({ kind: "system", job: "imports" }, at);
const never = new AbortController().signal;
const stopping = AbortSignal.abort();
const later = (minutes: number) => new Date(WORLD_START.getTime() + minutes * 60_000);

async function runJobs(ctx: Context, signal = never) {
  for (const job of importJobs) await job.run(ctx, signal);
}

const read = (ctx: Context, claimed: ClaimedImport, signal = never) => runImport(ctx, claimed, signal, BATCH);

async function claimOrThrow(at?: Date): Promise<ClaimedImport> {
  const claimed = await claimImport(db, at ?? WORLD_START);
  if (!claimed) throw new Error("There was nothing to claim");
  return claimed;
}

/** Each row of the file exactly once, and the counts say so. */
async function expectWhole(id: string, source: string, count = ROWS) {
  expect(await shown(supervisor, id)).toMatchObject({
    state: "done",
    rowsDone: count,
    created: count,
    duplicates: 0,
    rejected: 0,
  });
  const stored = await db.select().from(transactions).where(eq(transactions.source, source));
  expect(stored).toHaveLength(count);
  expect(new Set(stored.map((one) => one.externalId)).size).toBe(count);
}

test("a server that stops gives the import back behind its last batch, and the next one goes on there", async () => {
  const { id } = await upload(supervisor, gzip(csv(rows(ROWS))), { source: "stopped" });
  await read(runner(), await claimOrThrow(), stopping);
  expect(await shown(supervisor, id)).toMatchObject({ state: "queued", rowsDone: BATCH, created: BATCH });
  await runJobs(runner());
  await expectWhole(id, "stopped");
});

test("a server whose lease ran out loses the batch it was at, and its successor reads every row once", async () => {
  const { id } = await upload(supervisor, csv(rows(ROWS)), { source: "lost" });
  const quiet = await claimOrThrow();
  expect(await claimImport(db, later(0.9))).toBeNull();
  const successor = await claimOrThrow(later(1.1));
  expect(successor.id).toBe(id);
  await expect(read(runner(), quiet)).rejects.toBeInstanceOf(LostLease);
  expect(await shown(supervisor, id)).toMatchObject({ state: "running", rowsDone: 0, created: 0 });
  expect(await db.select().from(transactions).where(eq(transactions.source, "lost"))).toEqual([]);
  await read(runner(later(1.1)), successor);
  await expectWhole(id, "lost");
});

test("a server that lost its lease before the end cannot end the import of its successor", async () => {
  const { id } = await upload(supervisor, csv(rows(3)), { source: "late" });
  const quiet = await claimOrThrow();
  await db
    .update(imports)
    .set({ mapping: { amount: null } })
    .where(eq(imports.id, id));
  const successor = await claimOrThrow(later(2));
  await expect(read(runner(), { ...quiet, mapping: { amount: null } })).rejects.toBeInstanceOf(LostLease);
  expect(await shown(supervisor, id)).toMatchObject({ state: "running", problem: null });
  await read(runner(later(2)), { ...successor, mapping: {} });
  await expectWhole(id, "late", 3);
});

test("two servers at the same import at once: each row is in once", async () => {
  const { id } = await upload(supervisor, csv(rows(ROWS)), { source: "both" });
  const first = await claimOrThrow();
  const second = await claimOrThrow(later(2));
  const ends = await Promise.allSettled([read(runner(), first), read(runner(later(2)), second)]);
  expect(ends.map(({ status }) => status)).toEqual(["rejected", "fulfilled"]);
  await expectWhole(id, "both");
});

test("two servers that look for work at once share the imports out", async () => {
  const [one, other] = [
    await upload(supervisor, csv(rows(900)), { source: "share-1" }),
    await upload(supervisor, csv(rows(900)), { source: "share-2" }),
  ];
  await Promise.all([runJobs(runner()), runJobs(runner())]);
  await expectWhole(one.id, "share-1", 900);
  await expectWhole(other.id, "share-2", 900);
});

test("a server killed in the middle of a batch: another one goes on, nothing lost and nothing twice", async () => {
  const { id } = await upload(supervisor, csv(rows(ROWS)), { source: "killed" });
  const progress = async () => (await shown(supervisor, id)).rowsDone;
  const first = holdTrailHead();
  await first.had;
  const child = startRunner();
  const exited = once(child, "exit");
  // The database lets them through in turn: one batch of the child's, and then us again, before its second one ends.
  await expect.poll(countWaitingForHead, { timeout: 60_000 }).toBe(1);
  const second = holdTrailHead();
  await expect.poll(countWaitingForHead, { timeout: 60_000 }).toBe(2);
  await first.release();
  await second.had;
  expect(await progress()).toBe(BATCH);
  child.kill("SIGKILL");
  expect(await exited).toEqual([null, "SIGKILL"]);
  await second.release();
  expect(await shown(supervisor, id)).toMatchObject({ state: "running", rowsDone: BATCH });
  const state = async () => {
    await runJobs(runner(later(2)));
    return (await shown(supervisor, id)).state;
  };
  // The database may still be undoing what the dead server had begun.
  await expect.poll(state, { timeout: 60_000 }).toBe("done");
  await expectWhole(id, "killed");
});

/** Holds the head of the trail from `had` on, which every batch locks at its end. */
function holdTrailHead() {
  const [had, released] = [signalled(), signalled()];
  const done = db.transaction(async (tx) => {
    await tx.select().from(trailHead).for("update");
    had.resolve();
    await released.promise;
  });
  const release = async () => {
    released.resolve();
    await done;
  };
  return { had: had.promise, release };
}

/** The pattern is put together, so that this question does not count itself. */
async function countWaitingForHead(): Promise<number> {
  const [rows] = await world.pool.query(
    "select count(*) as waiting from information_schema.processlist where db = database() and info like concat('select%trail', '_head%for update')",
  );
  return Number((rows as { waiting: number }[])[0]?.waiting);
}

function startRunner() {
  return spawn(process.execPath, ["--import", "tsx", "tests/imports/import-runner.ts"], {
    cwd: path.resolve(import.meta.dirname, "../.."),
    env: {
      ...process.env,
      DATABASE_URL: world.url,
      RUNNER_NOW: WORLD_START.toISOString(),
      RUNNER_BATCH_ROWS: String(BATCH),
      TSX_TSCONFIG_PATH: "db/commands/tsconfig.json",
    },
    stdio: "inherit",
  });
}

test("a batch that fails by our fault is tried again, and in the end said, with what is in", async () => {
  const { id } = await upload(supervisor, csv(rows(BATCH + 3)), { source: "faulty" });
  await read(runner(), await claimOrThrow(), stopping);
  for (let attempt = 1; attempt <= 5; attempt++) {
    const claimed = await claimOrThrow(later(2 * attempt));
    expect(claimed.attempts).toBe(attempt);
  }
  await runJobs(runner(later(20)));
  expect(await shown(supervisor, id)).toMatchObject({
    state: "failed",
    rowsDone: BATCH,
    created: BATCH,
    problem: "Reading stopped behind row 200 by a fault on our side, 5 times",
  });
  expect(await db.select().from(importChunks).where(eq(importChunks.importId, id))).toEqual([]);
});

test("a row error is noted once, however often its batch was begun", async () => {
  const { id } = await upload(supervisor, csv([row(0), row(1, { amount: "-1.00" })]), { source: "noted" });
  const quiet = await claimOrThrow();
  const successor = await claimOrThrow(later(2));
  await Promise.allSettled([read(runner(), quiet), read(runner(later(2)), successor)]);
  expect((await shown(supervisor, id)).errors).toMatchObject([{ row: 3, path: "amount" }]);
});
