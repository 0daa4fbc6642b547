import { sql } from "drizzle-orm";
import { migrate } from "drizzle-orm/mysql2/migrator";
import { createDatabase } from "./client";

const LOCK_NAME = "cupel.migrate";
const LOCK_WAIT_SECONDS = 120;

/** Brings the schema up to date; two servers starting together take turns. */
export async function migrateDatabase(url: string): Promise<void> {
  // One connection, because the lock belongs to the session that took it.
  const { db, close } = createDatabase(url, 1);
  try {
    const [rows] = (await db.execute(
      sql`select get_lock(${LOCK_NAME}, ${LOCK_WAIT_SECONDS}) as got`,
    )) as unknown as [{ got: number | null }[]];
    if (rows[0]?.got !== 1)
      throw new Error("Another process has been migrating the database for two minutes");
    await migrate(db, { migrationsFolder: new URL("./migrations", import.meta.url).pathname });
    await db.execute(sql`select release_lock(${LOCK_NAME})`);
  } finally {
    await close();
  }
}
