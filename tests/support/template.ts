import { createConnection, type RowDataPacket } from "mysql2/promise";
import { migrateDatabase } from "@/db/migrate";

const template = "cupel_template";

/**
 * Migrates one schema and answers the statements that make a copy of it: four times as fast as migrating again,
 * because every index and key comes with its table. Changing the schema is MariaDB's slowest work.
 */
export async function describeTemplate(ownerUrl: string): Promise<string[]> {
  const connection = await createConnection(ownerUrl);
  const ask = async (sql: string, values: unknown[] = []) =>
    (await connection.query<RowDataPacket[]>(sql, values))[0];
  try {
    await connection.query(`CREATE DATABASE ${template}`);
    await migrateDatabase(Object.assign(new URL(ownerUrl), { pathname: `/${template}` }).href);
    await connection.query(`USE ${template}`);
    const statements = ["SET foreign_key_checks = 0"];
    const tables = (await ask("SHOW FULL TABLES WHERE Table_type = 'BASE TABLE'")).map((row) =>
      String(Object.values(row)[0]),
    );
    for (const table of tables) {
      const [created] = await ask(`SHOW CREATE TABLE \`${table}\``);
      statements.push(String(created?.["Create Table"]));
      const [count] = await ask(`SELECT COUNT(*) AS n FROM \`${table}\``);
      if (count?.n > 0) statements.push(`INSERT INTO \`${table}\` SELECT * FROM ${template}.\`${table}\``);
    }
    const triggers = await ask(
      `SELECT trigger_name AS name, action_timing AS timing, event_manipulation AS event,
              event_object_table AS tableName, action_statement AS body
         FROM information_schema.triggers WHERE trigger_schema = ? ORDER BY action_order`,
      [template],
    );
    for (const { name, timing, event, tableName, body } of triggers) {
      statements.push(
        `CREATE TRIGGER \`${name}\` ${timing} ${event} ON \`${tableName}\` FOR EACH ROW ${body}`,
      );
    }
    return [...statements, "SET foreign_key_checks = 1"];
  } finally {
    await connection.end();
  }
}
