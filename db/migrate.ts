import { sql } from "drizzle-orm";
import { migrate } from "drizzle-orm/mysql2/migrator";
import { z } from "zod";
import { createDatabase } from "./client";

const LOCK_NAME = "cupel.migrate";
const LOCK_WAIT_SECONDS = 120;
const LockAnswer = z.tuple([z.tuple([z.object({ got: z.int().nullable() })]), z.unknown()]);

/** Brings the schema up to date; two servers starting together take turns. */
export async function migrateDatabase(url: string): Promise<void> {
  // One connection, because the lock belongs to the session that took it.
  const { db, close } = createDatabase(url, 1);
  try {
    const answer = await db.execute(sql`select get_lock(${LOCK_NAME}, ${LOCK_WAIT_SECONDS}) as got`);
    const [[lock]] = LockAnswer.parse(answer);
    if (lock.got !== 1) throw new Error("Another process has been migrating the database for two minutes");
    await migrate(db, { migrationsFolder: new URL("./migrations", import.meta.url).pathname });
    await db.execute(sql`select release_lock(${LOCK_NAME})`);
  } finally {
    await close();
  }
}
