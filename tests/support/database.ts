import { randomBytes } from "node:crypto";
import { createConnection } from "mysql2/promise";
import { afterAll, inject } from "vitest";
import { createDatabase, type DatabaseHandle } from "@/db/client";

/** `db` and `url` act as the app's own account; `ownerUrl` may change the schema, as migrations do. */
export type TestDatabase = DatabaseHandle & { url: string; ownerUrl: string };

/**
 * A migrated schema of this test file's own on the run's MariaDB, dropped when the file is done.
 * Call it at the top of a file; called in a hook or a test, it has to be closed there.
 */
export async function testDatabase(): Promise<TestDatabase> {
  const name = `cupel_t_${randomBytes(6).toString("hex")}`;
  const server = inject("mariadb");
  const url = inSchema(server.url, name);
  const ownerUrl = inSchema(server.ownerUrl, name);
  await onServer(server.ownerUrl, [`CREATE DATABASE ${name}`, `USE ${name}`, ...server.schemaStatements]);
  const handle = createDatabase(url);
  let open = true;
  const close = async () => {
    if (!open) return;
    open = false;
    await handle.close();
    await onServer(server.ownerUrl, [`DROP DATABASE ${name}`]);
  };
  afterAll(close);
  return { ...handle, url, ownerUrl, close };
}

function inSchema(url: string, name: string): string {
  return Object.assign(new URL(url), { pathname: `/${name}` }).href;
}

async function onServer(url: string, statements: string[]): Promise<void> {
  const connection = await createConnection(url);
  try {
    for (const statement of statements) await connection.query(statement);
  } finally {
    await connection.end();
  }
}
