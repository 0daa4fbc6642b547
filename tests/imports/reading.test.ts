import { eq } from "drizzle-orm";
import { expect, test } from "vitest";
import { importChunks, imports, transactions } from "@/db/schema/transactions";
import { importErrorsCsv } from "@/lib/imports/errors-csv";
import { importJobs } from "@/lib/imports/jobs";
import { searchTrail } from "@/lib/trail/search";
import { testWorld } from "../support/world";
import { csv, gzip, HEADER, row, rows, shown, upload } from "./uploads";

const world = await testWorld();
const { db } = world;
const supervisor = world.ctx(await world.person("supervisor"));
const auditor = world.ctx(await world.person("auditor"));
const runner = world.ctx({ kind: "system", job: "imports" });

async function readAll() {
  for (const job of importJobs) await job.run(runner, new AbortController().signal);
}

async function imported(content: Buffer, form: Parameters<typeof upload>[2] = {}) {
  const { id } = await upload(supervisor, content, form);
  await readAll();
  return shown(supervisor, id);
}

const storedIds = async (source: string) =>
  (await db.select().from(transactions).where(eq(transactions.source, source))).map((one) => one.externalId);

test("a file is read to its end: every row once, scored, counted, and its content dropped", async () => {
  const done = await imported(csv(rows(2_345)), { source: "whole" });
  expect(done).toMatchObject({
    state: "done",
    fileName: "payments.csv",
    source: "whole",
    rowsDone: 2_345,
    created: 2_345,
    duplicates: 0,
    rejected: 0,
    problem: null,
    errors: [],
  });
  expect(done.readBytes).toBe(done.sizeBytes);
  expect(done.finishedAt).not.toBeNull();
  expect(new Set(await storedIds("whole")).size).toBe(2_345);
  expect(await db.select().from(importChunks).where(eq(importChunks.importId, done.id))).toEqual([]);
  const [stored] = await db.select().from(transactions).where(eq(transactions.externalId, "P-3"));
  expect(stored).toMatchObject({ amountMinor: 1_300, currency: "EUR", attributes: { basket: 3 } });
});

test("the trail has the upload and its end, each with counts and no content", async () => {
  const { id } = await imported(csv(rows(3)), { source: "trailed" });
  const { items } = await searchTrail(auditor, { subject: `import:${id}`, limit: 50 });
  expect(items.map(({ act }) => act)).toEqual(["import.finished", "import.received"]);
  expect(items[0]?.facts).toMatchObject({ source: "trailed", rows: 3, created: 3, rejected: 0 });
});

test("sent again, the same file brings nothing twice; gzip makes no difference", async () => {
  await imported(csv(rows(300)), { source: "again" });
  const again = await imported(gzip(csv(rows(300))), { source: "again" });
  expect(again).toMatchObject({ state: "done", created: 0, duplicates: 300, rejected: 0 });
  expect(await storedIds("again")).toHaveLength(300);
});

test("each bad row is told by its line, its payment and its field, and costs no other", async () => {
  const lines = rows(12);
  lines[2] = row(2, { amount: "12.345" });
  lines[4] = `${row(4)},one too many`;
  lines[5] = row(5).split(",").slice(0, 5).join(",");
  lines[7] = row(7, { id: 'P-7"' });
  lines[9] = row(9, { amount: "10000000000000000.00" });
  const done = await imported(csv(lines), { source: "rows" });
  expect(done).toMatchObject({ state: "done", rowsDone: 12, created: 7, rejected: 5 });
  expect(done.errors).toMatchObject([
    { row: 4, externalId: "P-2", path: "amount" },
    { row: 6, externalId: null, path: "", message: "has 10 cells, the header 9" },
    { row: 7, externalId: null, path: "", message: "has 5 cells, the header 9" },
    { row: 9, externalId: null, path: "", message: expect.stringContaining("quote") },
    { row: 11, externalId: "P-9", path: "amount" },
  ]);
  expect((await storedIds("rows")).sort()).toEqual(
    ["P-0", "P-1", "P-10", "P-11", "P-3", "P-6", "P-8"].sort(),
  );
});

test("headers of other names are mapped, and columns can be left out", async () => {
  const content = Buffer.from(
    [
      "\uFEFFRef,When,Sum,Cur,Way,Cust,Shop,Memo",
      'R-1,2026-02-27T10:00:00Z,5.00,EUR,card_remote,A,B,"a, b"',
    ].join("\n"),
  );
  const mapping = {
    Ref: "externalId",
    When: "occurredAt",
    Sum: "amount",
    Cur: "currency",
    Way: "channel",
    Cust: "accountId",
    Shop: "counterpartyId",
    Memo: null,
  };
  const done = await imported(content, { source: "mapped", mapping: JSON.stringify(mapping) });
  expect(done).toMatchObject({ state: "done", created: 1 });
});

test.each([
  ["an empty line only", Buffer.from("\n"), "The file is empty"],
  [
    "a header that lacks the amount",
    Buffer.from("externalId,currency\nX,EUR\n"),
    /^No column stands for occurredAt, amount/,
  ],
  ["a column that is no field", Buffer.from(`${HEADER},colour\n${row(1)},red\n`), /^Column 10 is no field/],
  ["no header but data", Buffer.from(`${row(1)}\n`), /^Column 1 is no field/],
  ["UTF-16", Buffer.from(`\uFEFF${HEADER}\n`, "utf16le"), "The header is not text in UTF-8"],
  ["a picture", Buffer.from("89504e470d0a1a0a0000000d49484452", "hex"), "The header is not text in UTF-8"],
])("a file with %s is refused whole, in plain words", async (_, content, problem) => {
  const failed = await imported(content, { source: "refused" });
  expect(failed).toMatchObject({ state: "failed", rowsDone: 0, created: 0 });
  expect(failed.problem).toMatch(problem);
  expect(await storedIds("refused")).toEqual([]);
});

test("a gzip file that was cut off: what is whole is in and counted, and the rest is said", async () => {
  const whole = gzip(csv(rows(3_000)));
  const cut = await imported(whole.subarray(0, Math.floor(whole.byteLength * 0.7)), { source: "cut" });
  expect(cut.state).toBe("failed");
  expect(cut.problem).toBe("The gzip file ends before its end: it was cut off");
  expect(cut.rowsDone).toBeGreaterThan(1_000);
  expect(cut.rowsDone).toBeLessThan(3_000);
  expect(cut).toMatchObject({ created: cut.rowsDone, rejected: 0 });
  const ids = await storedIds("cut");
  expect(new Set(ids).size).toBe(cut.rowsDone);
  const again = await imported(whole, { source: "cut" });
  expect(again).toMatchObject({ state: "done", created: 3_000 - ids.length, duplicates: ids.length });
});

test("a zip bomb is left off, said, and costs neither memory nor the next import", async () => {
  const bomb = gzip(Buffer.concat([csv(rows(5)), Buffer.from(`${"x".repeat(2_000)}\n`.repeat(20_000))]));
  const failed = await imported(bomb, { source: "bomb" });
  expect(failed.state).toBe("failed");
  expect(failed.problem).toBe("The file unpacks to far more than its size and was not read to its end");
  expect(failed).toMatchObject({ created: 5 });
  expect(await imported(csv(rows(5)), { source: "bomb" })).toMatchObject({ state: "done", duplicates: 5 });
});

const CARD = "4111 1111 1111 1111";

test("a card number costs its row and is found nowhere afterwards", async () => {
  const lines = [
    row(0),
    row(1, { name: CARD }),
    row(2, { id: CARD.replaceAll(" ", "") }),
    row(3, { account: CARD }),
  ];
  const done = await imported(csv(lines), { source: "cards" });
  expect(done).toMatchObject({ created: 1, rejected: 3 });
  expect(done.errors.map(({ path }) => path)).toEqual(["counterpartyName", "externalId", "accountId"]);
  const download = await (await importErrorsCsv(supervisor, { id: done.id })).text();
  for (const kept of [JSON.stringify(done), download, JSON.stringify(await db.select().from(imports))]) {
    expect(kept.replace(/\D/g, "")).not.toContain(CARD.replace(/\D/g, ""));
  }
});

test("all row errors come as CSV, harmless for spreadsheets, however many there are", async () => {
  const many = Array.from({ length: 4_321 }, (_, index) => row(index, { id: `=cmd${index}`, amount: "x" }));
  const done = await imported(csv(many), { source: "errors" });
  expect(done).toMatchObject({ created: 0, rejected: 4_321 });
  expect(done.errors).toHaveLength(200);
  const response = await importErrorsCsv(auditor, { id: done.id });
  expect(response.headers.get("Content-Type")).toBe("text/csv; charset=utf-8");
  const lines = (await response.text()).trimEnd().split("\r\n");
  expect(lines).toHaveLength(4_322);
  expect(lines.slice(0, 2)).toEqual([
    "line,externalId,field,message",
    `2,'=cmd0,amount,"is not a decimal number of 0 or more, such as ""129.90"""`,
  ]);
});
