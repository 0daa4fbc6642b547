import type { Database, Tx } from "./client";
import { isWorthRetrying } from "./errors";

const ATTEMPTS = 5;

/**
 * Runs `work` in one READ COMMITTED transaction and again, whole, after a deadlock or a lost lock wait.
 * `work` must therefore touch nothing but the database.
 */
export async function inTransaction<T>(db: Database, work: (tx: Tx) => Promise<T>): Promise<T> {
  for (let attempt = 1; ; attempt++) {
    try {
      // The level is the session's (`createDatabase`): naming it here would cost every transaction a statement.
      return await db.transaction(work);
    } catch (error) {
      if (attempt >= ATTEMPTS || !isWorthRetrying(error)) throw error;
      await new Promise((resolve) => setTimeout(resolve, 5 * 2 ** attempt * (0.5 + Math.random())));
    }
  }
}
