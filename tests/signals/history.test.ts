import { beforeAll, describe, expect, it } from "vitest";
import { labelledEntities, transactions } from "@/db/schema/transactions";
import { newId } from "@/lib/new-id";
import { NEWEST_READ, readHistory } from "@/lib/signals/history";
import { type TestDatabase, testDatabase } from "../support/database";
import { DAY, NOON } from "./example";

let database: TestDatabase;
beforeAll(async () => {
  database = await testDatabase();
});

type Row = Partial<typeof transactions.$inferInsert>;

async function insertPayments(rows: Row[]): Promise<string[]> {
  const values = rows.map((row) => ({
    id: newId(),
    source: "test",
    externalId: newId(),
    contentHash: Buffer.alloc(32),
    receivedAt: new Date(NOON),
    occurredAt: new Date(NOON),
    amountMinor: 100,
    amountBaseMinor: 100,
    currency: "EUR",
    direction: "outgoing" as const,
    channel: "card_remote" as const,
    accountId: "a",
    counterpartyId: "s",
    action: "pass" as const,
    paymentState: "settled" as const,
    ...row,
  }));
  await database.db.insert(transactions).values(values);
  return values.map(({ id }) => id);
}

const trace = (accountId: string, atMs = NOON, more: object = {}) => ({
  occurredAtMs: atMs,
  amountBaseMinor: 100,
  direction: "outgoing" as const,
  accountId,
  cardRef: null,
  deviceId: null,
  counterpartyId: `${accountId}-shop`,
  counterpartyCountry: null,
  ...more,
});

describe("history of a batch", () => {
  it("holds thirty days of each entity up to its last payment, oldest first, as stored", async () => {
    await insertPayments(
      [30 * DAY, 30 * DAY - 1, 5, 0, -1].map((agoMs) => ({
        accountId: "window",
        occurredAt: new Date(NOON - agoMs),
        counterpartyId: `shop ${agoMs}`,
        deviceId: "d",
        counterpartyCountry: "FR",
        direction: "incoming",
        amountBaseMinor: agoMs === 5 ? null : 100,
      })),
    );
    const history = await readHistory(database.db, [trace("window")]);
    const activity = history.of(trace("window")).account?.activity;
    expect(activity?.others).toEqual([`shop ${30 * DAY - 1}`, "shop 5", "shop 0"]);
    expect(activity?.atMs).toEqual([NOON - 30 * DAY + 1, NOON - 5, NOON]);
    expect(activity?.amountsBaseMinor[1]).toBeNaN();
    expect(activity?.incoming[0]).toBe(true);
    expect(activity?.devices[0]).toBe("d");
    expect(activity?.countries[0]).toBe("FR");
  });

  it("finds the accounts behind a card, a device and a counterparty", async () => {
    await insertPayments([{ accountId: "x", cardRef: "card", deviceId: "dev", counterpartyId: "shop-x" }]);
    const payment = trace("y", NOON, { cardRef: "card", deviceId: "dev", counterpartyId: "shop-x" });
    const found = (await readHistory(database.db, [payment])).of(payment);
    expect([found.card, found.device, found.counterparty].map((entity) => entity?.activity.others)).toEqual([
      ["x"],
      ["x"],
      ["x"],
    ]);
    expect(found.account?.activity.length).toBe(0);
  });

  it("keeps entities with the same key but another kind or case apart", async () => {
    await insertPayments([{ accountId: "Same" }, { accountId: "same", cardRef: "Same" }]);
    const payment = trace("Same", NOON, { cardRef: "Same" });
    const found = (await readHistory(database.db, [payment])).of(payment);
    expect(found.account?.activity.others).toEqual(["s"]);
    expect(found.card?.activity.others).toEqual(["same"]);
  });

  it("reads no more than the newest payments of a busy entity", async () => {
    const busy = Array.from({ length: NEWEST_READ + 20 }, (_, i) => ({
      accountId: "busy",
      occurredAt: new Date(NOON - i * 1000),
    }));
    await insertPayments(busy);
    const activity = (await readHistory(database.db, [trace("busy")])).of(trace("busy")).account?.activity;
    expect(activity?.length).toBe(NEWEST_READ);
    expect(activity?.atMs.at(-1)).toBe(NOON);
  });

  it("knows the labels of every time", async () => {
    const [id] = await insertPayments([{ accountId: "labelled" }]);
    await database.db.insert(labelledEntities).values({
      entityKind: "account",
      entityKey: "labelled",
      transactionId: id as string,
      label: 1,
      occurredAt: new Date(NOON - 100 * DAY),
      labelledAt: new Date(NOON),
    });
    const labels = (await readHistory(database.db, [trace("labelled")])).of(trace("labelled")).account
      ?.labels;
    expect(labels?.count(NOON, Number.POSITIVE_INFINITY)).toEqual({ fraudulent: 1, legitimate: 0 });
    expect(labels?.count(NOON, Number.POSITIVE_INFINITY, id)).toEqual({ fraudulent: 0, legitimate: 0 });
  });

  it("of thousands of entities is read in few statements, each answered from an index alone", async () => {
    const payments = Array.from({ length: 1_000 }, (_, i) =>
      trace(`many-${i}`, NOON, { deviceId: `many-${i}`, cardRef: `many-${i}` }),
    );
    const statements: string[] = [];
    const client = database.db.$client;
    const query = client.query.bind(client);
    Object.assign(client, {
      query: (options: { sql: string }, ...rest: []) => {
        statements.push(options.sql);
        return query(options as never, ...rest);
      },
    });
    await readHistory(database.db, payments);
    Object.assign(client, { query });
    expect(statements).toHaveLength((4 * 1_000) / 250 + 4);
    const together = statements.find((sql) => sql.includes("where account_id in")) as string;
    const [plan] = await query(`explain ${together}`, [
      ["many-1", "many-2"],
      new Date(NOON - DAY),
      new Date(NOON),
    ]);
    expect(plan).toMatchObject([
      { key: "transactions_account", Extra: expect.stringContaining("Using index") },
    ]);
  });
});
