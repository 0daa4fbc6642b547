import { writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { createDatabase } from "@/db/client";
import type { QueueItem } from "@/lib/cases/schema";
import { startApp } from "../support/app";
import type { Row } from "../support/bench";
import { Api, insertKey } from "./support/api";
import { ms, percent, quantile } from "./support/figures";
import { setTerms } from "./support/install";
import { readRows } from "./support/stream";

const ACCOUNTS_A_DAY = 100;
const CHARGEBACK_DELAY_DAYS = 7;
const BATCH_ROWS = 1_000;
const TEST_WEEK_FROM = "2018-06-05";

type Payment = {
  externalId: string;
  accountId: string;
  amount: string;
  occurredAt: string;
  [field: string]: string;
};
type Seen = { payment: Payment; transactionId: string; probability: number; caseId: string | null };

export const needs = ["CUPEL_STREAM", "CUPEL_STREAM_FRAUD"];

/**
 * Six weeks of card payments over HTTP, a day a batch. Each day the first hundred accounts of the queue are
 * decided with the list of fraud as the reviewers' knowledge; fraud that nobody reviewed comes back as a chargeback
 * a week later. `CUPEL_STREAM` and `CUPEL_STREAM_FRAUD` name the two files; `CUPEL_STREAM_REVIEW_FROM` a first day.
 */
export async function run(): Promise<Row[]> {
  const { CUPEL_STREAM = "", CUPEL_STREAM_FRAUD = "", CUPEL_STREAM_REVIEW_FROM = "" } = process.env;
  const fraud = new Set((await readRows(CUPEL_STREAM_FRAUD)).map((row) => row.externalId ?? ""));
  const days = groupBy((await readRows(CUPEL_STREAM)) as Payment[], (payment) =>
    payment.occurredAt.slice(0, 10),
  );
  const app = await startApp({ durable: true, env: { CUPEL_REQUESTS_PER_MINUTE: "1000000" } });
  const { db, close } = createDatabase(app.databaseUrl, 2);
  try {
    await setTerms(db, { reviewThreshold: { kind: "capacity", casesPerDay: 400 }, takeNextOnly: false });
    const sender = new Api(app.url, await insertKey(db, ["transactions:write", "outcomes:write"]));
    const reviewer = new Api(app.url, await insertKey(db, ["cases:read", "cases:decide"], ["reviewer"]));
    return await liveThrough(days, fraud, sender, reviewer, CUPEL_STREAM_REVIEW_FROM);
  } finally {
    await close();
    await app.stop();
  }
}

async function liveThrough(
  days: Map<string, Payment[]>,
  fraud: ReadonlySet<string>,
  sender: Api,
  reviewer: Api,
  reviewFrom: string,
): Promise<Row[]> {
  const scores: string[] = ["externalId,probability"];
  const decisionMs: number[] = [];
  const unreviewed: Payment[][] = [];
  const found = { valueMinor: 0, fraudMinor: 0, casesOpened: 0, decided: 0, rows: 0, intakeMs: 0 };
  let dayNumber = 0;
  for (const [day, payments] of days) {
    await chargeBack(sender, unreviewed[dayNumber - CHARGEBACK_DELAY_DAYS] ?? []);
    const startedMs = performance.now();
    const seen = await sendDay(sender, payments);
    found.intakeMs += performance.now() - startedMs;
    for (const one of seen) scores.push(`${one.payment.externalId},${one.probability}`);
    const reviewed =
      day < reviewFrom ? new Set<string>() : await reviewDay(reviewer, seen, fraud, decisionMs);
    const frauds = payments.filter((payment) => fraud.has(payment.externalId));
    unreviewed.push(frauds.filter((payment) => !reviewed.has(payment.externalId)));
    found.rows += payments.length;
    found.casesOpened += seen.filter((one) => one.caseId !== null).length;
    found.decided += reviewed.size;
    found.fraudMinor += sumMinor(frauds);
    found.valueMinor += sumMinor(frauds.filter((payment) => reviewed.has(payment.externalId)));
    dayNumber += 1;
    console.log(`${day}: ${payments.length} payments, ${frauds.length} fraudulent, ${reviewed.size} decided`);
  }
  const scoresFile = path.join(tmpdir(), "cupel-outside-scores.csv");
  writeFileSync(scoresFile, `${scores.join("\n")}\n`);
  console.log(`Scores at arrival are in ${scoresFile}; judge the week from ${TEST_WEEK_FROM}.`);
  const row = (name: string, measured: string): Row => ({ name, measured, limit: "–", ok: true });
  return [
    row("payments over HTTP", `${Math.round((1000 * found.rows) / found.intakeMs)} rows/s`),
    row("cases opened a day", (found.casesOpened / days.size).toFixed(0)),
    row("payments decided", String(found.decided)),
    row("share of the fraudulent value found by review", percent(found.valueMinor / found.fraudMinor)),
    row("decision call p50", ms(quantile(decisionMs, 0.5))),
    {
      name: "decision call p95",
      measured: ms(quantile(decisionMs, 0.95)),
      limit: "40 ms",
      ok: quantile(decisionMs, 0.95) <= 40,
    },
  ];
}

async function sendDay(sender: Api, payments: Payment[]): Promise<Seen[]> {
  const seen: Seen[] = [];
  for (let from = 0; from < payments.length; from += BATCH_ROWS) {
    const part = payments.slice(from, from + BATCH_ROWS);
    type Result = { status: string; transactionId: string; probability: number; caseId: string | null };
    const { results } = await sender.mustPost<{ results: Result[] }>("/api/transactions", {
      transactions: part,
    });
    for (const [index, result] of results.entries()) {
      if (result.status !== "created") throw new Error(`A payment was ${result.status}`);
      seen.push({ payment: part[index] as Payment, ...result });
    }
  }
  return seen;
}

/** @returns identifiers of the payments that were decided */
async function reviewDay(
  reviewer: Api,
  seen: Seen[],
  fraud: ReadonlySet<string>,
  decisionMs: number[],
): Promise<Set<string>> {
  const byAccount = groupBy(seen, (one) => one.payment.accountId);
  const today = new Set(seen.map((one) => one.payment.externalId));
  const finding = (externalId: string) =>
    fraud.has(externalId)
      ? { verdict: "fraudulent", typology: "details_theft" }
      : { verdict: "legitimate", typology: null };
  const reviewed = new Set<string>();
  for (const item of await topOfQueue(reviewer, today)) {
    const others = (byAccount.get(item.accountId) ?? []).filter(
      (one) => one.payment.externalId !== item.externalId,
    );
    const { revision } = await reviewer.mustPost<{ revision: number }>(`/api/cases/${item.caseId}/claim`, {});
    const answer = await reviewer.post(`/api/cases/${item.caseId}/decision`, {
      ...finding(item.externalId),
      confidence: "sure",
      seenVersion: revision,
      together: others
        .slice(0, 50)
        .map((one) => ({ transactionId: one.transactionId, ...finding(one.payment.externalId) })),
    });
    if (answer.status !== 200)
      throw new Error(`A decision answered ${answer.status}: ${JSON.stringify(answer.body)}`);
    decisionMs.push(answer.ms);
    reviewed.add(item.externalId);
    for (const one of others.slice(0, 50)) reviewed.add(one.payment.externalId);
  }
  return reviewed;
}

/** The best case of each of the first hundred accounts that paid today, in the order of the queue. */
async function topOfQueue(reviewer: Api, today: ReadonlySet<string>): Promise<QueueItem[]> {
  const best = new Map<string, QueueItem>();
  for (let cursor: string | null = ""; cursor !== null; ) {
    const query: string = cursor ? `?limit=1000&cursor=${encodeURIComponent(cursor)}` : "?limit=1000";
    const { body } = await reviewer.get<{ items: QueueItem[]; next: string | null }>(`/api/queue${query}`);
    for (const item of body.items) {
      if (!today.has(item.externalId) || best.has(item.accountId)) continue;
      best.set(item.accountId, item);
      if (best.size === ACCOUNTS_A_DAY) return [...best.values()];
    }
    cursor = body.next;
  }
  return [...best.values()];
}

async function chargeBack(sender: Api, payments: Payment[]): Promise<void> {
  for (let from = 0; from < payments.length; from += BATCH_ROWS) {
    await sender.mustPost("/api/outcomes", {
      outcomes: payments.slice(from, from + BATCH_ROWS).map((payment) => ({
        externalId: payment.externalId,
        kind: "chargeback",
        reasonFamily: "fraud",
        stage: "opened",
        occurredAt: payment.occurredAt,
      })),
    });
  }
}

const sumMinor = (payments: Payment[]) =>
  payments.reduce((sum, payment) => sum + Math.round(Number(payment.amount) * 100), 0);

function groupBy<T>(items: readonly T[], keyOf: (item: T) => string): Map<string, T[]> {
  const groups = new Map<string, T[]>();
  for (const item of items) {
    const group = groups.get(keyOf(item));
    if (group) group.push(item);
    else groups.set(keyOf(item), [item]);
  }
  return groups;
}
