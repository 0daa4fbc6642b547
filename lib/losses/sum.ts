import "server-only";
import { type AnyColumn, type SQL, sql } from "drizzle-orm";

/**
 * A sum of integers, 0 over no rows. MariaDB adds up as exact decimals and sends them as text: two of the largest
 * amounts are already beyond what a number holds exactly.
 */
export function sum(column: AnyColumn, where?: SQL): SQL<bigint> {
  const value = where ? sql`case when ${where} then ${column} else 0 end` : sql`${column}`;
  return sql`coalesce(sum(${value}), 0)`.mapWith(BigInt);
}

/** Number of rows, of those alone that meet the condition where one is given. */
export function count(where?: SQL): SQL<number> {
  return (where ? sql`count(case when ${where} then 1 end)` : sql`count(*)`).mapWith(Number);
}
