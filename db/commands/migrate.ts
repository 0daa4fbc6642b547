import { migrateDatabase } from "@/db/migrate";
import { readEnvironment } from "@/lib/env";

/** Run by the other commands: checks the settings, then migrates as the account that owns the schema. */
const [ownerUrl] = process.argv.slice(2);
if (!ownerUrl) throw new Error("usage: migrate.ts <url of the owner's account>");
try {
  readEnvironment(process.env);
} catch (error) {
  console.error(error instanceof Error ? error.message : error);
  process.exit(2);
}
await migrateDatabase(ownerUrl);
