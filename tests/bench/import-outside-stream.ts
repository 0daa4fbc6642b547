import { openAsBlob, readFileSync } from "node:fs";
import path from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { createConnection } from "mysql2/promise";
import { createDatabase } from "@/db/client";
import { ImportView } from "@/lib/imports/schema";
import { newId } from "@/lib/new-id";
import { type RunningApp, startApp } from "../support/app";
import type { Row } from "../support/bench";
import { makePerson, TEST_PASSWORD } from "../support/people";
import { type CookieJar, signedIn, visit } from "../support/session";
import { quantile } from "./support/figures";
import { ensureInstalled } from "./support/install";
import { readRows } from "./support/stream";

const FEWEST_ROWS_A_SECOND = 2_000;
/** Flat: the last third of the import needs hardly more memory than the second. */
const GROWTH_AT_MOST = 1.2;
const ROWS_IN_INSERT = 1_000;
const LOOK_EVERY_MS = 250;

export const needs = ["CUPEL_STREAM"];

/**
 * The whole file `CUPEL_STREAM` names through the product's own upload and import, in the server beside everything
 * else it does; and the same rows by plain multi-row INSERT into a table with the same columns and indexes.
 */
export async function run(): Promise<Row[]> {
  const file = process.env.CUPEL_STREAM ?? "";
  const payments = await readRows(file);
  const days = new Set(payments.map((payment) => payment.occurredAt?.slice(0, 10))).size;
  const app = await startApp({ durable: true, env: { CUPEL_REQUESTS_PER_MINUTE: "1000000" } });
  try {
    const plain = await insertPlainly(app.ownerUrl, payments);
    const jar = await supervisor(app);
    const startedMs = performance.now();
    const id = await upload(app.url, jar, file);
    const { end, memoryMb } = await follow(app, jar, id);
    const seconds = (performance.now() - startedMs) / 1_000;
    if (end.state !== "done" || end.created !== payments.length) {
      throw new Error(
        `The import ended ${end.state} with ${end.created} of ${payments.length} rows: ${end.problem}`,
      );
    }
    const shown = memoryMb.filter((_, i) => i % Math.ceil(memoryMb.length / 24) === 0);
    console.log(
      `Memory of the server in MB, evenly over ${seconds.toFixed(0)} s: ${shown.map(Math.round).join(" ")}`,
    );
    const perSecond = end.created / seconds;
    const third = Math.floor(memoryMb.length / 3);
    const growth = quantile(memoryMb.slice(2 * third), 0.5) / quantile(memoryMb.slice(third, 2 * third), 0.5);
    return [
      {
        name: "import with signals and scoring",
        measured: `${perSecond.toFixed(0)} rows/s`,
        limit: `at least ${FEWEST_ROWS_A_SECOND} rows/s`,
        ok: perSecond >= FEWEST_ROWS_A_SECOND,
      },
      row("the same rows by plain multi-row INSERT", `${plain.toFixed(0)} rows/s`),
      row("memory of the server, peak", `${Math.max(...memoryMb).toFixed(0)} MB`),
      {
        name: "memory of the server, last third against the second",
        measured: growth.toFixed(2),
        limit: `at most ${GROWTH_AT_MOST}`,
        ok: growth <= GROWTH_AT_MOST,
      },
      row("cases opened a day", (end.casesOpened / days).toFixed(0)),
    ];
  } finally {
    await app.stop();
  }
}

const row = (name: string, measured: string): Row => ({ name, measured, limit: "–", ok: true });

/** Into a twin of the table of payments, so that both write the same columns and keep the same indexes. @returns rows a second */
async function insertPlainly(ownerUrl: string, payments: Record<string, string>[]): Promise<number> {
  const connection = await createConnection({ uri: ownerUrl, timezone: "Z" });
  try {
    await connection.query("create table plain_transactions like transactions");
    const startedMs = performance.now();
    for (let from = 0; from < payments.length; from += ROWS_IN_INSERT) {
      const now = new Date();
      const values = payments.slice(from, from + ROWS_IN_INSERT).map((payment) => {
        const minor = Math.round(Number(payment.amount) * 100);
        const { externalId, occurredAt = "", currency, channel, accountId, counterpartyId } = payment;
        const [hash, at] = [Buffer.alloc(32), new Date(occurredAt)];
        return [
          newId(),
          "plain",
          externalId,
          hash,
          now,
          at,
          minor,
          currency,
          minor,
          "outgoing",
          channel,
          accountId,
          counterpartyId,
          "pass",
          "settled",
        ];
      });
      await connection.query(
        `insert into plain_transactions (id, source, external_id, content_hash, received_at, occurred_at, amount_minor,
          currency, amount_base_minor, direction, channel, account_id, counterparty_id, action, payment_state) values ?`,
        [values],
      );
    }
    const seconds = (performance.now() - startedMs) / 1_000;
    await connection.query("drop table plain_transactions");
    return payments.length / seconds;
  } finally {
    await connection.end();
  }
}

async function supervisor({ url, databaseUrl }: RunningApp): Promise<CookieJar> {
  const { db, close } = createDatabase(databaseUrl, 1);
  try {
    await ensureInstalled(db);
    const { email } = await makePerson(db, ["supervisor"]);
    return await signedIn(url, email, TEST_PASSWORD);
  } finally {
    await close();
  }
}

async function upload(url: string, jar: CookieJar, file: string): Promise<string> {
  const form = new FormData();
  form.set("source", "stream");
  form.set("file", await openAsBlob(file), path.basename(file));
  const response = await visit(url, "/api/imports", jar, { method: "POST", body: form });
  if (response.status !== 202)
    throw new Error(`The upload answered ${response.status}: ${await response.text()}`);
  return ImportView.parse(await response.json()).id;
}

/** Looks at the import, as its page does, and at the server's memory until the import ends. */
async function follow(
  { url, pid }: RunningApp,
  jar: CookieJar,
  id: string,
): Promise<{ end: ImportView; memoryMb: number[] }> {
  const memoryMb: number[] = [];
  for (;;) {
    memoryMb.push(residentMb(pid));
    const response = await visit(url, `/api/imports/${id}`, jar);
    const end = ImportView.loose().parse(await response.json());
    if (end.state === "done" || end.state === "failed") return { end, memoryMb };
    await sleep(LOOK_EVERY_MS);
  }
}

function residentMb(pid: number): number {
  const line = /^VmRSS:\s+(\d+) kB$/m.exec(readFileSync(`/proc/${pid}/status`, "utf8"));
  return Number(line?.[1]) / 1_024;
}
