import { setTimeout as sleep } from "node:timers/promises";
import { sql } from "drizzle-orm";
import { createDatabase, type Database } from "@/db/client";
import type { DemoTransaction } from "@/db/demo/payment";
import { scenarioDays } from "@/db/demo/scenario";
import type { CaseView } from "@/lib/cases/schema";
import { startApp } from "../support/app";
import type { Row } from "../support/bench";
import { Api, insertKey } from "./support/api";
import { ms, quantile } from "./support/figures";
import { setTerms } from "./support/install";

const WAITING_CASES = 10_000;
const REVIEWERS = 10;
const DECISIONS_EACH = 30;
const LIMIT_MS = 40;
/** Mean look at a case. Nobody is that fast all day: ten of them decide more than ten thousand cases an hour. */
const PAUSE_MS = 3_000;

/** Ten reviewers deciding at once on a queue of ten thousand: with a short look at each case, and without any. */
export async function run(): Promise<Row[]> {
  const app = await startApp({ durable: true, env: { CUPEL_REQUESTS_PER_MINUTE: "1000000" } });
  const { db, close } = createDatabase(app.databaseUrl, 2);
  try {
    // Everything is an alert, so that the queue fills.
    await setTerms(db, {
      reviewThreshold: { kind: "fixed", probability: 0 },
      holdThreshold: 1,
      dailyCapacity: 1_000_000,
    });
    await fillQueue(new Api(app.url, await insertKey(db, ["transactions:write"])));
    const keys = await Promise.all(
      Array.from({ length: REVIEWERS }, () => insertKey(db, ["cases:read", "cases:decide"], ["reviewer"])),
    );
    const reviewers = keys.map((key) => new Api(app.url, key));
    await work(reviewers, 5, 0);
    await age(db);
    const paced = await work(reviewers, DECISIONS_EACH, PAUSE_MS);
    const flatOut = await work(reviewers, DECISIONS_EACH, 0);
    const p95 = quantile(paced, 0.95);
    return [
      {
        name: `decision p50, ${REVIEWERS} reviewers`,
        measured: ms(quantile(paced, 0.5)),
        limit: "–",
        ok: true,
      },
      {
        name: `decision p95, ${REVIEWERS} reviewers`,
        measured: ms(p95),
        limit: ms(LIMIT_MS),
        ok: p95 <= LIMIT_MS,
      },
      { name: "the same without a pause, p50", measured: ms(quantile(flatOut, 0.5)), limit: "–", ok: true },
      { name: "the same without a pause, p95", measured: ms(quantile(flatOut, 0.95)), limit: "–", ok: true },
    ];
  } finally {
    await close();
    await app.stop();
  }
}

async function fillQueue(sender: Api): Promise<void> {
  let sent = 0;
  for (let seed = 1; sent < WAITING_CASES + 2_000; seed++) {
    for (const { transactions } of scenarioDays(seed, new Date("2026-11-30T00:00:00Z"))) {
      const items = transactions.map(({ item }) => asCustomersOf(seed, item));
      await sender.mustPost("/api/transactions", { transactions: items.slice(0, 1_000) });
      sent += items.length;
    }
  }
}

/** The queue has stood for a while: none of it is news that the server would look at again for two minutes. */
async function age(db: Database): Promise<void> {
  await db.execute(sql`update cases set changed_at = changed_at - interval 1 hour`);
  await sleep(10_000);
}

/** Every scenario has customers of its own; the merchants and payees are the same everywhere. */
function asCustomersOf(seed: number, item: DemoTransaction["item"]): DemoTransaction["item"] {
  const own = ["externalId", "accountId", "cardRef", "deviceId"];
  const renamed = Object.entries(item).map(([field, value]) =>
    own.includes(field) && typeof value === "string" ? [field, `${seed}-${value}`] : [field, value],
  );
  return Object.fromEntries(renamed);
}

/** @returns the time of each decision call in ms */
async function work(reviewers: Api[], decisions: number, pauseMs: number): Promise<number[]> {
  const times: number[] = [];
  await Promise.all(
    reviewers.map(async (api, number) => {
      for (let index = 0; index < decisions; index++) {
        if (pauseMs > 0) await sleep(pauseMs * (0.5 + Math.random()));
        const view = await api.mustPost<CaseView>("/api/queue/next", {});
        const fraudulent = (number + index) % 10 === 0;
        const answer = await api.post(`/api/cases/${view.caseId}/decision`, {
          verdict: fraudulent ? "fraudulent" : "legitimate",
          typology: fraudulent ? "other" : null,
          confidence: "sure",
          seenVersion: view.revision,
        });
        if (answer.status !== 200)
          throw new Error(`A decision answered ${answer.status}: ${JSON.stringify(answer.body)}`);
        times.push(answer.ms);
      }
    }),
  );
  return times;
}
