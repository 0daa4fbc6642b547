import { getTableColumns, sql } from "drizzle-orm";
import { toSnakeCase } from "drizzle-orm/casing";
import { getTableConfig, type MySqlTable } from "drizzle-orm/mysql-core";
import { escapeId, escape as escapeValue, type SqlValue } from "mysql2";
import type { Tx } from "./client";

const ROWS_IN_STATEMENT = 500;

/**
 * Inserts many rows as text of our own: the query builder makes several objects of every value, which for thousands
 * of wide rows costs more than the database does. A column that no row names gets its default.
 */
export async function insertRows<Table extends MySqlTable>(
  tx: Tx,
  table: Table,
  rows: readonly Table["$inferInsert"][],
): Promise<void> {
  const columns = Object.entries(getTableColumns(table)).filter(([key]) => rows.some((row) => key in row));
  const names = columns.map(([, { keyAsName, name }]) => escapeId(keyAsName ? toSnakeCase(name) : name));
  const head = `insert into ${escapeId(getTableConfig(table).name)} (${names.join(", ")}) values `;
  const asText = (row: Record<string, unknown>) => {
    const values = columns.map(([key, column]) => {
      const value = row[key];
      const stored = value === null || value === undefined ? null : column.mapToDriverValue(value);
      return escapeValue(stored as SqlValue, false, "Z");
    });
    return `(${values.join(",")})`;
  };
  let running: Promise<unknown> = Promise.resolve();
  for (let from = 0; from < rows.length; from += ROWS_IN_STATEMENT) {
    // The next statement is written while the database works on the last one.
    const statement =
      head +
      rows
        .slice(from, from + ROWS_IN_STATEMENT)
        .map(asText)
        .join(",");
    await running;
    running = tx.execute(sql.raw(statement));
  }
  await running;
}
