// Long: every promise of one use case, on one installation.
import { createHash } from "node:crypto";
import { and, count, eq } from "drizzle-orm";
import { beforeAll, describe, expect, it } from "vitest";
import { bytesToVector } from "@/db/columns";
import { cases } from "@/db/schema/cases";
import { settings } from "@/db/schema/people";
import { policies } from "@/db/schema/policies";
import { trail } from "@/db/schema/trail";
import { arrivalDays, currencyRates, scores, transactions } from "@/db/schema/transactions";
import type { Context } from "@/lib/context";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { DEFAULT_TERMS } from "@/lib/policy/default-terms";
import type { PolicyTerms } from "@/lib/policy/schema";
import { CATALOGUE } from "@/lib/signals/catalogue";
import { recomputeVectors } from "@/lib/signals/recompute";
import { isMissing } from "@/lib/signals/vectors";
import { receiveBatch, receiveTransactions } from "@/lib/transactions/receive";
import { isDrawn } from "@/lib/transactions/sample";
import { sendTransactions } from "@/lib/transactions/send";
import { ReplayedAnswer } from "@/lib/write-once";
import { testWorld, WORLD_START, type World } from "../support/world";
import { paymentItems } from "./payments";

let world: World;
let sender: Context;

beforeAll(async () => {
  world = await testWorld();
  sender = world.ctx({
    kind: "key",
    id: "0195f000-0000-7000-8000-000000000001",
    source: "shop",
    scopes: ["transactions:write"],
  });
});

let sources = 0;
/** A source of its own, so that identifiers of one test are new to it. */
const newSource = () => `source-${++sources}`;
const rowsOf = (source: string) =>
  world.db.select().from(transactions).where(eq(transactions.source, source)).orderBy(transactions.seq);
const setTerms = (terms: Partial<PolicyTerms>) =>
  world.db
    .update(policies)
    .set({ terms: { ...DEFAULT_TERMS, sampleShare: 0, ...terms } })
    .where(eq(policies.version, 1));
const totals = async () => {
  const of = async (table: typeof transactions | typeof scores | typeof cases | typeof trail) =>
    (await world.db.select({ rows: count() }).from(table))[0]?.rows;
  const days = await world.db.select().from(arrivalDays);
  return [await of(transactions), await of(scores), await of(cases), await of(trail), days];
};

describe("a batch of payments", () => {
  it("is stored in the order sent, each with its score, and answered one by one", async () => {
    await setTerms({});
    const source = newSource();
    const items = paymentItems(20);
    const results = await receiveTransactions(sender, { source, items });
    const rows = await rowsOf(source);
    expect(rows.map((row) => row.externalId)).toEqual(items.map((item) => item.externalId));
    expect(results.map((result) => result.transactionId)).toEqual(rows.map((row) => row.id));
    expect(results[0]).toEqual({
      externalId: "P-0",
      status: "created",
      transactionId: rows[0]?.id,
      action: "pass",
      probability: expect.any(Number),
      evidenceDecibans: expect.any(Number),
      holdExpiresAt: null,
      caseId: null,
      policyVersion: 1,
      scorerVersion: 1,
      errors: [],
    });
    const { probability = null, evidenceDecibans } = results[0] ?? {};
    expect(evidenceDecibans).toBeCloseTo(10 * Math.log10((probability ?? 0) / (1 - (probability ?? 0))), 2);
    const scored = await world.db
      .select()
      .from(scores)
      .innerJoin(transactions, eq(transactions.id, scores.transactionId))
      .where(eq(transactions.source, source));
    expect(scored).toHaveLength(20);
  });

  it("loses nothing to its bad items", async () => {
    const source = newSource();
    const items: unknown[] = paymentItems(5);
    items[1] = { ...(items[1] as object), amount: "ten" };
    items[3] = null;
    const results = await receiveTransactions(sender, { source, items });
    expect(results.map(({ status }) => status)).toEqual([
      "created",
      "rejected",
      "created",
      "rejected",
      "created",
    ]);
    expect(results[1]).toMatchObject({
      externalId: "P-1",
      transactionId: null,
      errors: [{ path: "amount" }],
    });
    expect(results[3]?.externalId).toBeNull();
    expect(await rowsOf(source)).toHaveLength(3);
  });

  it("writes one trail entry with counts and references only", async () => {
    const source = newSource();
    const results = await receiveTransactions(sender, {
      source,
      items: [...paymentItems(3, { counterpartyName: "Ada Quill" }), {}],
    });
    const entries = await world.db
      .select()
      .from(trail)
      .where(and(eq(trail.act, "transactions.received"), eq(trail.subjectId, source)));
    expect(entries).toHaveLength(1);
    expect(JSON.parse(entries[0]?.facts ?? "")).toEqual({
      created: 3,
      duplicates: 0,
      rejected: 1,
      casesOpened: 0,
      firstTransactionId: results[0]?.transactionId,
      lastTransactionId: results[2]?.transactionId,
      policyVersion: 1,
      scorerVersion: 1,
    });
  });

  it("leaves nothing behind where it fails on its way", async () => {
    await setTerms({ reviewThreshold: { kind: "fixed", probability: 0 } });
    const before = await totals();
    const alongside = async () => {
      throw new Error("the server stopped here");
    };
    await expect(
      receiveTransactions(sender, { source: newSource(), items: paymentItems(5), alongside }),
    ).rejects.toThrow("stopped here");
    expect(await totals()).toEqual(before);
    await setTerms({});
  });
});

describe("a payment that was sent before", () => {
  it("gets the original answer, and is stored once", async () => {
    await setTerms({ reviewThreshold: { kind: "fixed", probability: 0 } });
    const source = newSource();
    const first = await receiveTransactions(sender, { source, items: paymentItems(10) });
    const again = await receiveTransactions(sender, { source, items: paymentItems(10).toReversed() });
    expect(again.toReversed()).toEqual(first.map((result) => ({ ...result, status: "duplicate" })));
    expect(first.every(({ caseId }) => caseId !== null)).toBe(true);
    expect(await rowsOf(source)).toHaveLength(10);
    await setTerms({});
  });

  it("is rejected where its content differs, and stays as it was", async () => {
    const source = newSource();
    await receiveTransactions(sender, { source, items: paymentItems(1) });
    const [other] = await receiveTransactions(sender, { source, items: paymentItems(1, { amount: "1.00" }) });
    expect(other).toMatchObject({ externalId: "P-0", status: "rejected", errors: [{ path: "externalId" }] });
    expect((await rowsOf(source)).map((row) => row.amountMinor)).toEqual([1_000]);
  });

  it("is told from new ones within the batch itself", async () => {
    const source = newSource();
    const [one] = paymentItems(1);
    const results = await receiveTransactions(sender, {
      source,
      items: [one, one, { ...one, amount: "2.00" }],
    });
    expect(results.map(({ status }) => status)).toEqual(["created", "duplicate", "rejected"]);
    expect(results[1]).toEqual({ ...results[0], status: "duplicate" });
  });

  it("is another payment under another source", async () => {
    const items = paymentItems(1);
    const [a] = await receiveTransactions(sender, { source: newSource(), items });
    const [b] = await receiveTransactions(sender, { source: newSource(), items });
    expect([a?.status, b?.status]).toEqual(["created", "created"]);
  });

  it("is created once when many senders come at the same moment", async () => {
    const source = newSource();
    const answers = await Promise.all(
      Array.from({ length: 8 }, () => receiveTransactions(sender, { source, items: paymentItems(6) })),
    );
    const statuses = answers.flat().map(({ status }) => status);
    expect(statuses.filter((status) => status === "created")).toHaveLength(6);
    expect(statuses.filter((status) => status === "duplicate")).toHaveLength(7 * 6);
    expect(new Set(answers.flat().map(({ transactionId }) => transactionId)).size).toBe(6);
    expect(await rowsOf(source)).toHaveLength(6);
  });

  it("is answered the same under the same Idempotency-Key, without being looked at again", async () => {
    const keyed = {
      ...sender,
      idempotency: { key: "send-1", requestHash: createHash("sha256").update("body").digest() },
    };
    const batch = { source: newSource(), items: paymentItems(2) };
    const first = await receiveBatch(keyed, batch);
    expect(first.results.map(({ status }) => status)).toEqual(["created", "created"]);
    await expect(receiveBatch(keyed, batch)).rejects.toSatisfy(
      (thrown) => thrown instanceof ReplayedAnswer && JSON.stringify(thrown.answer) === JSON.stringify(first),
    );
  });
});

describe("what becomes of a payment", () => {
  it("follows the policy: held where the channel can hold, refused where it cannot", async () => {
    await setTerms({ reviewThreshold: { kind: "fixed", probability: 0 }, holdThreshold: 0 });
    const source = newSource();
    const items = [{ channel: "card_remote" }, { channel: "instant_transfer" }].map((change, i) => ({
      ...paymentItems(2)[i],
      ...change,
    }));
    const results = await receiveTransactions(sender, { source, items });
    expect(results.map(({ action }) => action)).toEqual(["hold", "hold"]);
    const holdExpiresAt = new Date(
      WORLD_START.getTime() + DEFAULT_TERMS.channels.card_remote.holdMinutes * 60_000,
    ).toISOString();
    expect(results.map((result) => result.holdExpiresAt)).toEqual([holdExpiresAt, null]);
    const opened = await world.db
      .select()
      .from(cases)
      .innerJoin(transactions, eq(transactions.id, cases.transactionId))
      .where(eq(transactions.source, source))
      .orderBy(cases.number);
    expect(opened.map((row) => [row.cases.kind, row.cases.zone, row.transactions.paymentState])).toEqual([
      ["alert", "hold", "held"],
      ["alert", "hold", "refused"],
    ]);
    expect(opened.map((row) => row.cases.id)).toEqual(results.map(({ caseId }) => caseId));
    await setTerms({});
  });

  it("may be a sample, drawn with a chance that its case records and the secret repeats", async () => {
    await setTerms({
      sampleShare: 0.2,
      dailyCapacity: 1_000,
      reviewThreshold: { kind: "fixed", probability: 1 },
    });
    await world.db.insert(arrivalDays).values({ day: "2025-11-04", received: 300, passed: 250 });
    const source = newSource();
    const items = paymentItems(60, {}, "2025-11-05T06:00:00Z");
    const results = await receiveTransactions(sender, { source, items });
    const [secret] = await world.db.select().from(settings).where(eq(settings.key, "sampleSecret"));
    const drawn = results.filter(({ transactionId }) =>
      isDrawn(Buffer.from(secret?.value as string, "base64"), transactionId as string, 0.8),
    );
    expect(results.every(({ action }) => action === "pass")).toBe(true);
    expect(results.filter(({ caseId }) => caseId !== null)).toEqual(drawn);
    expect(drawn.length).toBeGreaterThan(30);
    const opened = await world.db
      .select({ kind: cases.kind, zone: cases.zone, sampleProbability: cases.sampleProbability })
      .from(cases)
      .innerJoin(transactions, eq(transactions.id, cases.transactionId))
      .where(eq(transactions.source, source));
    expect(opened).toEqual(
      Array(drawn.length).fill({ kind: "sample", zone: "pass", sampleProbability: 0.8 }),
    );
    await setTerms({});
  });

  it("counts arrivals and passed payments by the day they happened on", async () => {
    await receiveTransactions(sender, {
      source: newSource(),
      items: [...paymentItems(2, {}, "2024-05-01T23:59:00Z"), ...paymentItems(0)],
    });
    await receiveTransactions(sender, {
      source: newSource(),
      items: paymentItems(1, {}, "2024-05-02T12:00:00Z"),
    });
    const days = await world.db.select().from(arrivalDays).where(eq(arrivalDays.day, "2024-05-02"));
    expect(days).toEqual([{ day: "2024-05-02", received: 2, passed: 2 }]);
  });
});

describe("amounts in other currencies", () => {
  it("are compared by the rate of the day, or the newest of the week before", async () => {
    await world.db.insert(currencyRates).values([
      { currency: "JPY", day: "2026-02-27", rate: 0.006 },
      { currency: "JPY", day: "2026-03-03", rate: 0.5 },
      { currency: "KWD", day: "2026-03-02", rate: 3 },
      { currency: "USD", day: "2026-02-20", rate: 0.9 },
    ]);
    const source = newSource();
    const [a, b, c] = paymentItems(3);
    await receiveTransactions(sender, {
      source,
      items: [
        { ...a, currency: "JPY", amount: "10000" },
        { ...b, currency: "KWD", amount: "1.234" },
        { ...c, currency: "USD", amount: "5.00" },
      ],
    });
    const rows = await rowsOf(source);
    expect(rows.map((row) => row.amountBaseMinor)).toEqual([6_000, 370, null]);
    const [score] = await world.db
      .select()
      .from(scores)
      .where(eq(scores.transactionId, rows[2]?.id as string));
    const size = CATALOGUE.findIndex(({ key }) => key === "amount_size");
    expect(isMissing(score?.missing as Buffer, size)).toBe(true);
  });
});

describe("signals at arrival", () => {
  it("are, to the bit, those that the stored payments give afterwards", async () => {
    const source = newSource();
    const change = {
      accountId: "A-parity",
      counterpartyId: "S-parity",
      deviceId: "D-parity",
      cardRef: "C-parity",
    };
    const items = paymentItems(60, change, "2026-01-10T06:00:00Z").map((item, i) => ({
      ...item,
      // Some at the same moment, some on the same account only.
      occurredAt: new Date(Date.parse(item.occurredAt) - (i % 3) * 60_000 + i * 3_600_000).toISOString(),
      counterpartyId: i % 4 === 0 ? "S-other" : item.counterpartyId,
    }));
    for (const part of [items.slice(0, 1), items.slice(1, 40), items.slice(40)]) {
      await receiveTransactions(sender, { source, items: part });
    }
    const rows = await world.db
      .select()
      .from(scores)
      .innerJoin(transactions, eq(transactions.id, scores.transactionId))
      .where(eq(transactions.source, source));
    const again = await recomputeVectors(
      world.db,
      rows.map((row) => row.transactions.id),
      (await readScorerInUse(world.db)).signals,
    );
    expect(again.size).toBe(60);
    for (const row of rows) {
      const { vector, missing } = again.get(row.transactions.id) ?? {};
      expect([...(vector ?? [])]).toEqual([...bytesToVector(row.scores.vector)]);
      expect(Buffer.from(missing ?? [])).toEqual(row.scores.missing);
    }
  });

  it("do not depend on the order in which a batch was put together", async () => {
    const vectors = async (accountId: string, turn: (items: object[]) => object[]) => {
      const source = newSource();
      const change = {
        accountId,
        counterpartyId: `${accountId}-s`,
        deviceId: `${accountId}-d`,
        cardRef: `${accountId}-c`,
      };
      await receiveTransactions(sender, { source, items: turn(paymentItems(12, change)) });
      const rows = await world.db
        .select()
        .from(scores)
        .innerJoin(transactions, eq(transactions.id, scores.transactionId))
        .where(eq(transactions.source, source))
        .orderBy(transactions.occurredAt);
      return rows.map((row) => [...bytesToVector(row.scores.vector)]);
    };
    expect(await vectors("A-back", (items) => items.toReversed())).toEqual(
      await vectors("A-forth", (items) => items),
    );
  });
});

describe("who may send", () => {
  it("is a key with the scope for it, into its own source", async () => {
    const [result] = (await sendTransactions(sender, { transactions: paymentItems(1) })).results;
    expect(result?.status).toBe("created");
    expect(await rowsOf("shop")).toHaveLength(1);
  });

  it("is no person and no other key", async () => {
    const supervisor = world.ctx(await world.person("supervisor"));
    const otherKey = world.ctx({
      kind: "key",
      id: "0195f000-0000-7000-8000-000000000002",
      source: "shop",
      scopes: ["outcomes:write"],
    });
    for (const ctx of [supervisor, otherKey]) {
      await expect(sendTransactions(ctx, { transactions: paymentItems(1) })).rejects.toMatchObject({
        code: "forbidden",
      });
    }
  });
});
