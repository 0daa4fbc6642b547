import { existsSync, rmSync, writeFileSync } from "node:fs";
import path from "node:path";
import { startMariadb } from "./mariadb.mjs";
import { readPeople } from "./people.mjs";
import { Refusal } from "./refusal.mjs";
import { runScript } from "./scripts.mjs";

/** What migrate.ts exits with when it is the settings that are wrong. */
const badSettings = 2;

/** @param {string} folder */
const demoMark = (folder) => path.join(folder, "demo-data-unfinished");

/**
 * The database a command works on: the outside one that DATABASE_URL names, or the project's own, started here.
 * @param {object} given
 * @param {string} given.folder the data folder
 * @param {NodeJS.ProcessEnv} given.env
 * @param {import("./session.mjs").Session} given.session
 * @param {import("./occupancy.mjs").Occupancy} [given.occupancy]
 * @param {boolean} [given.fast] without durability
 * @returns {Promise<{ url: string, ownerUrl: string, mariadb?: import("./mariadb.mjs").Mariadb }>}
 */
export async function openDatabase({ folder, env, session, occupancy, fast }) {
  if (env.DATABASE_URL) return { url: env.DATABASE_URL, ownerUrl: env.DATABASE_URL };
  if (existsSync(demoMark(folder))) {
    console.log("Making the demo data was interrupted last time; starting again with an empty database.");
    rmSync(path.join(folder, "mariadb"), { recursive: true, force: true });
    rmSync(demoMark(folder));
  }
  const mariadb = await startMariadb(folder, {
    fast,
    signal: session.signal,
    onSpawn: (service) => {
      session.watch(service);
      occupancy?.addChild(service);
    },
  });
  occupancy?.note({ databasePort: mariadb.port });
  return { url: mariadb.url, ownerUrl: mariadb.ownerUrl, mariadb };
}

/**
 * Checks the settings and brings the schema up to date.
 * @param {NodeJS.ProcessEnv} env the app's
 * @param {string} ownerUrl
 * @param {AbortSignal} signal
 */
export async function migrate(env, ownerUrl, signal) {
  const code = await runScript("db/commands/migrate.ts", [ownerUrl], env, signal);
  if (code === badSettings) throw new Refusal("Cupel does not start with these settings.");
  if (code !== 0) throw new Refusal("The database was not brought up to date; the reason is above.");
}

/**
 * Makes the demo data in a database that nobody works in yet.
 * @param {object} given
 * @param {string} given.folder the data folder
 * @param {NodeJS.ProcessEnv} given.env the app's
 * @param {boolean} given.embedded
 * @param {AbortSignal} given.signal
 */
export async function ensureDemoData({ folder, env, embedded, signal }) {
  if (env.CUPEL_DEMO !== "1") return;
  const people = await readPeople(env.DATABASE_URL ?? "");
  if (people.size > 0) {
    console.log(`Demo data: nothing made, ${people.size} people are in the database already.`);
    return;
  }
  console.log("Making the demo data …");
  if (embedded) writeFileSync(demoMark(folder), "Nobody has worked in this database yet.\n");
  const code = await runScript("db/demo/seed.ts", [], env, signal);
  if (code !== 0) throw new Refusal("The demo data was not made; the reason is above.");
  rmSync(demoMark(folder), { force: true });
}
