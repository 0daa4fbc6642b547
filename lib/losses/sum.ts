import "server-only";
import { type AnyColumn, type SQL, sql } from "drizzle-orm";

/**
 * A sum of integers, 0 over no rows. MariaDB adds up as exact decimals; what does not fit a double exactly is an
 * error rather than a rounded figure.
 */
export function sum(column: AnyColumn, where?: SQL): SQL<number> {
  const value = where ? sql`case when ${where} then ${column} else 0 end` : sql`${column}`;
  return sql`coalesce(sum(${value}), 0)`.mapWith(toInteger);
}

/** Number of rows, of those alone that meet the condition where one is given. */
export function count(where?: SQL): SQL<number> {
  return (where ? sql`count(case when ${where} then 1 end)` : sql`count(*)`).mapWith(toInteger);
}

function toInteger(value: string | number): number {
  const number = Number(value);
  if (!Number.isSafeInteger(number))
    throw new RangeError("A sum is beyond the integers a number holds exactly");
  return number;
}
