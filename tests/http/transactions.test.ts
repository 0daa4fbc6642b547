import { eq } from "drizzle-orm";
import { afterAll, beforeAll, describe, expect, inject, it } from "vitest";
import { createDatabase } from "@/db/client";
import { transactions } from "@/db/schema/transactions";
import { addKey } from "@/lib/keys/add";
import { newId } from "@/lib/new-id";
import type { TransactionsView } from "@/lib/transactions/schema";
import { contextOf, makePerson, TEST_PASSWORD } from "../support/people";
import { signedIn, visit } from "../support/session";
import { paymentItems } from "../transactions/payments";

const { url } = inject("app");
const { db, close } = createDatabase(inject("mariadb").url);
afterAll(close);

const source = `payments-${newId().slice(-6)}`;
let secret: string | null;
beforeAll(async () => {
  const ctx = contextOf(db, await makePerson(db, ["administrator"]));
  ({ secret } = await addKey(ctx, { name: newId(), source, scopes: ["transactions:write"] }));
});

type Problem = { status: number; errors?: { path: string; message: string }[] };

async function send<T = TransactionsView>(body: unknown, headers: Record<string, string> = {}) {
  const response = await fetch(new URL("/api/transactions", url), {
    method: "POST",
    headers: { "Content-Type": "application/json", Authorization: `Bearer ${secret}`, ...headers },
    body: typeof body === "string" ? body : JSON.stringify(body),
  });
  const text = await response.text();
  return {
    status: response.status,
    type: response.headers.get("Content-Type"),
    text,
    body: JSON.parse(text) as T,
  };
}
/** Payments with identifiers of their own, so that tests do not meet each other's. */
const fresh = (count: number, change: Record<string, unknown> = {}) => {
  const run = newId().slice(-12);
  // A letter between digits: in a row they might pass for a card's number, which intake refuses.
  return paymentItems(count, change).map((item, i) => ({ ...item, externalId: `${run}x${i}` }));
};
const stored = () => db.$count(transactions, eq(transactions.source, source));

describe("POST /api/transactions", () => {
  it("answers one result for each, in order, and the same figures when they come again", async () => {
    const items = fresh(25);
    const first = await send({ transactions: items });
    expect(first.status).toBe(200);
    expect(first.body.results.map(({ externalId, status }) => [externalId, status])).toEqual(
      items.map(({ externalId }) => [externalId, "created"]),
    );
    const again = await send({ transactions: items });
    expect(again.body.results).toEqual(
      first.body.results.map((result) => ({ ...result, status: "duplicate" })),
    );
  });

  it("takes the good ones in beside a bad one, and repeats no card number", async () => {
    const items = fresh(3);
    const bad = { ...items[1], attributes: { note: "4111 1111 1111 1111" } };
    const answer = await send({ transactions: [items[0], bad, items[2]] });
    expect(answer.status).toBe(200);
    expect(answer.body.results.map(({ status }) => status)).toEqual(["created", "rejected", "created"]);
    expect(answer.body.results[1]?.errors).toEqual([
      { path: "attributes.note", message: expect.stringContaining("payment card number") },
    ]);
    expect(answer.text).not.toContain("1111 1111");
  });

  it("creates one payment however many copies come at once", async () => {
    const [item] = fresh(1);
    const answers = await Promise.all(Array.from({ length: 20 }, () => send({ transactions: [item] })));
    const results = answers.map(({ body }) => body.results[0]);
    expect(results.filter((result) => result?.status === "created")).toHaveLength(1);
    expect(results.filter((result) => result?.status === "duplicate")).toHaveLength(19);
    expect(new Set(results.map((result) => JSON.stringify({ ...result, status: "" }))).size).toBe(1);
  });

  it("gives a repeated request its first answer, and refuses its key to another", async () => {
    const headers = { "Idempotency-Key": newId() };
    const body = { transactions: fresh(2) };
    const first = await send(body, headers);
    const again = await send(body, headers);
    expect(first.body.results[0]?.status).toBe("created");
    expect(again.body).toEqual(first.body);
    const other = await send<Problem>({ transactions: fresh(2) }, headers);
    expect(other).toMatchObject({ status: 422, body: { errors: [{ path: "Idempotency-Key" }] } });
  });

  it.each([
    ["no items", { transactions: [] }, 422, "transactions"],
    ["too many items", { transactions: Array.from({ length: 1_001 }, () => ({})) }, 422, "transactions"],
    ["another shape", { transactions: "all of them" }, 422, "transactions"],
    ["an unknown field", { transactions: [{}], dryRun: true }, 422, "dryRun"],
    ["text that is not JSON", "{", 422, ""],
    ["a list", "[]", 422, ""],
  ])("refuses %s whole, as a problem that names the field", async (_, body, status, path) => {
    const answer = await send<Problem>(body);
    expect(answer).toMatchObject({ status, type: "application/problem+json" });
    expect(answer.body.errors?.map((error) => error.path)).toEqual([path]);
  });

  it("refuses a body of 6 MB and another media type, and stores nothing of them", async () => {
    const before = await stored();
    const large = await send<Problem>({
      transactions: fresh(1, { attributes: { pad: "x".repeat(6 * 1024 ** 2) } }),
    });
    expect(large).toMatchObject({ status: 413, type: "application/problem+json" });
    const text = await send<Problem>(JSON.stringify({ transactions: fresh(1) }), {
      "Content-Type": "text/plain",
    });
    expect(text.status).toBe(415);
    expect(await stored()).toBe(before);
  });

  it("is for keys with the scope for it, and for no person", async () => {
    expect((await send({ transactions: fresh(1) }, { Authorization: "Bearer nobody" })).status).toBe(401);
    const { email } = await makePerson(db, ["supervisor"]);
    const jar = await signedIn(url, email, TEST_PASSWORD);
    const response = await visit(url, "/api/transactions", jar, {
      method: "POST",
      headers: { "Content-Type": "application/json" },
      body: JSON.stringify({ transactions: fresh(1) }),
    });
    expect(response.status).toBe(403);
  });
});
