import { asc } from "drizzle-orm";
import { expect, test } from "vitest";
import { isRefusedByTrigger } from "@/db/errors";
import { trail } from "@/db/schema/trail";
import { inTransaction } from "@/db/tx";
import { newId } from "@/lib/new-id";
import { appendTrail } from "@/lib/trail/append";
import { verifyTrail } from "@/lib/trail/verify";
import { testDatabase } from "../support/database";
import { contextOf } from "../support/people";

const database = await testDatabase();
const { db } = database;
const ctx = contextOf(db, { kind: "system", job: "test" });

const entry = (n: number) => ({
  act: "case.claimed",
  subjectKind: "case",
  subjectId: newId(),
  facts: { n, logit: 0.1 + 0.2 },
});

test("twenty transactions at once leave a chain without gap or fork", async () => {
  const before = await verifyTrail(db);
  const writers = Array.from({ length: 20 }, (_, n) =>
    inTransaction(db, (tx) => appendTrail(ctx, tx, entry(n), entry(n + 100))),
  );
  await Promise.all(writers);
  const check = await verifyTrail(db);
  expect(check).toMatchObject({ intact: true, firstBrokenSeq: null, entries: before.entries + 40 });
  const rows = await db.select({ seq: trail.seq }).from(trail).orderBy(asc(trail.seq));
  expect(rows.map((row) => row.seq)).toEqual(rows.map((_, i) => i + 1));
});

test("a transaction that rolls back leaves neither entry nor gap", async () => {
  const before = await verifyTrail(db);
  await expect(
    inTransaction(db, async (tx) => {
      await appendTrail(ctx, tx, entry(1));
      throw new Error("changed my mind");
    }),
  ).rejects.toThrow("changed my mind");
  await inTransaction(db, (tx) => appendTrail(ctx, tx, entry(2)));
  const after = await verifyTrail(db);
  expect(after).toMatchObject({ intact: true, head: { seq: before.head.seq + 1 } });
});

test.each(["UPDATE trail SET act = 'policy.approved' WHERE seq = 1", "DELETE FROM trail WHERE seq = 1"])(
  "the database refuses %s, from the app's account and from the owner's",
  async (statement) => {
    await inTransaction(db, (tx) => appendTrail(ctx, tx, entry(1)));
    for (const url of [database.url, database.ownerUrl]) {
      const refusal = await run(url, statement).catch((error: unknown) => error);
      expect(isRefusedByTrigger(refusal)).toBe(true);
    }
    expect((await verifyTrail(db)).intact).toBe(true);
  },
);

test("a change behind the database's back is found at its place, and a cut-off end by the noted head alone", async () => {
  for (let n = 0; n < 5; n++) await inTransaction(db, (tx) => appendTrail(ctx, tx, entry(n)));
  const { head } = await verifyTrail(db);
  expect((await verifyTrail(db, head)).notedStands).toBe(true);

  await run(database.ownerUrl, "DROP TRIGGER trail_no_update", "DROP TRIGGER trail_no_delete");
  const [victim] = await db.select().from(trail).orderBy(asc(trail.seq)).limit(1);
  await run(database.ownerUrl, `UPDATE trail SET act = 'case.released' WHERE seq = ${victim?.seq}`);
  expect(await verifyTrail(db)).toMatchObject({ intact: false, firstBrokenSeq: victim?.seq });
  await run(database.ownerUrl, `UPDATE trail SET act = '${victim?.act}' WHERE seq = ${victim?.seq}`);
  expect((await verifyTrail(db)).intact).toBe(true);

  await run(database.ownerUrl, `DELETE FROM trail WHERE seq = ${head.seq}`);
  expect(await verifyTrail(db)).toMatchObject({ intact: false, firstBrokenSeq: head.seq });

  // Whoever can do that can move the head as well; what was noted outside still tells.
  await run(
    database.ownerUrl,
    `UPDATE trail_head SET seq = ${head.seq - 1}, hash = (SELECT hash FROM trail WHERE seq = ${head.seq - 1})`,
  );
  expect(await verifyTrail(db, head)).toMatchObject({ intact: true, notedStands: false });
});

async function run(url: string, ...statements: string[]): Promise<void> {
  const { createConnection } = await import("mysql2/promise");
  const connection = await createConnection(url);
  try {
    for (const statement of statements) await connection.query(statement);
  } finally {
    await connection.end();
  }
}
