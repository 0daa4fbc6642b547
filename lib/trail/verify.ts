import "server-only";
import { and, asc, eq, gt, lte } from "drizzle-orm";
import type { Database } from "@/db/client";
import { trail, trailHead } from "@/db/schema/trail";
import { type ChainCheck, type ChainRow, checkRows, EMPTY_CHECK, endsAt, type Head } from "./check-chain";

/** Rows held at a time, so that a long trail needs no more memory than a short one. */
const ROWS_AT_A_TIME = 2_000;

export type TrailCheck = Omit<ChainCheck, "last"> & {
  head: Head;
  /** Whether an entry noted outside earlier still stands as it was; null where none was given. */
  notedStands: boolean | null;
};

/** Walks the chain from its first entry to the head of this moment; entries that come meanwhile are left for later. */
export async function verifyTrail(db: Database, noted: Head | null = null): Promise<TrailCheck> {
  const head = await readHead(db);
  let check = EMPTY_CHECK;
  let at = 0;
  while (check.intact) {
    const rows = await nextRows(db, at, head.seq);
    if (rows.length === 0) break;
    check = checkRows(check, rows);
    at = rows.at(-1)?.seq ?? head.seq;
    // Hashing is work for the one thread that also answers people.
    await new Promise((resolve) => setImmediate(resolve));
  }
  const { last: _, ...result } = endsAt(check, head);
  return { ...result, head, notedStands: noted && (await stands(db, noted)) };
}

async function readHead(db: Database): Promise<Head> {
  const [head] = await db.select().from(trailHead).where(eq(trailHead.id, 1));
  if (!head) throw new Error("The trail has no head row; the database is not migrated");
  return { seq: head.seq, hash: head.hash };
}

async function nextRows(db: Database, after: number, upTo: number): Promise<ChainRow[]> {
  const rows = await db
    .select()
    .from(trail)
    .where(and(gt(trail.seq, after), lte(trail.seq, upTo)))
    .orderBy(asc(trail.seq))
    .limit(ROWS_AT_A_TIME);
  return rows.map((row) => ({ ...row, at: row.at.toISOString() }));
}

async function stands(db: Database, noted: Head): Promise<boolean> {
  const [row] = await db.select({ hash: trail.hash }).from(trail).where(eq(trail.seq, noted.seq));
  return row?.hash.equals(noted.hash) ?? false;
}
