import { createDatabase } from "@/db/client";
import { startApp } from "../support/app";
import type { Row } from "../support/bench";
import { paymentItems } from "../transactions/payments";
import { Api, insertKey } from "./support/api";
import { ms, quantile } from "./support/figures";
import { ensureInstalled } from "./support/install";

const EARLIER_BATCHES = 30;
const CALLS = 2_000;
const LIMIT_MS = 100;

/** A payment system that sends one payment at a time and waits for the answer, with a month of history behind it. */
export async function run(): Promise<Row[]> {
  const app = await startApp({ durable: true, env: { CUPEL_REQUESTS_PER_MINUTE: "1000000" } });
  const { db, close } = createDatabase(app.databaseUrl, 2);
  try {
    await ensureInstalled(db);
    const sender = new Api(app.url, await insertKey(db, ["transactions:write"]));
    const today = Date.now();
    for (let day = EARLIER_BATCHES; day > 0; day--) {
      await sender.mustPost("/api/transactions", {
        transactions: payments(1_000, `day-${day}`, today - day * 86_400_000),
      });
    }
    const times: number[] = [];
    for (const payment of payments(CALLS, "now", today - 3_600_000, 1_000)) {
      const answer = await sender.post("/api/transactions", { transactions: [payment] });
      if (answer.status !== 200) throw new Error(`A payment answered ${answer.status}`);
      times.push(answer.ms);
    }
    const p99 = quantile(times, 0.99);
    return [
      { name: "a single payment, p50", measured: ms(quantile(times, 0.5)), limit: "–", ok: true },
      { name: "a single payment, p99", measured: ms(p99), limit: ms(LIMIT_MS), ok: p99 <= LIMIT_MS },
    ];
  } finally {
    await close();
    await app.stop();
  }
}

/** Spread over some hundreds of accounts, cards, devices and counterparties. */
function payments(count: number, name: string, fromMs: number, everyMs = 60_000) {
  return paymentItems(count).map((item, i) => ({
    ...item,
    externalId: `${name}-${i}`,
    occurredAt: new Date(fromMs + i * everyMs).toISOString(),
    accountId: `A-${(i * 7) % 400}`,
    cardRef: `C-${(i * 7) % 400}`,
    deviceId: `D-${(i * 11) % 300}`,
    counterpartyId: `S-${(i * 13) % 200}`,
  }));
}
