import { drizzle, type MySql2Database } from "drizzle-orm/mysql2";
import { createPool, type Pool } from "mysql2/promise";
import * as schema from "./schema/index";

/** The pool beside it is for the one read that is too large for a query builder: history signals. */
export type Database = MySql2Database<typeof schema> & { $client: Pool };
export type Tx = Parameters<Parameters<Database["transaction"]>[0]>[0];
/** Where a read may run: on its own or inside somebody's transaction. */
export type Executor = Database | Tx;

export type DatabaseHandle = { db: Database; pool: Pool; close: () => Promise<void> };

export function createDatabase(url: string, connectionLimit = 12): DatabaseHandle {
  const pool = createPool({
    uri: url,
    connectionLimit,
    timezone: "Z",
    supportBigNumbers: true,
    jsonStrings: true,
    charset: "utf8mb4_bin",
  });
  // The pool hands out sessions of many transactions; the level is part of every one of them.
  pool.on("connection", (connection) => {
    connection.query("SET SESSION TRANSACTION ISOLATION LEVEL READ COMMITTED");
  });
  const db = drizzle(pool, { schema, mode: "default", casing: "snake_case" });
  return { db, pool, close: () => pool.end() };
}

// Next gives instrumentation, pages and route handlers each their own copy of a module; the pool is one per process.
const shared = globalThis as typeof globalThis & { cupelDatabase?: DatabaseHandle };

export function sharedDatabase(url: string): Database {
  shared.cupelDatabase ??= createDatabase(url);
  return shared.cupelDatabase.db;
}
