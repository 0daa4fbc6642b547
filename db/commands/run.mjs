import { existsSync } from "node:fs";
import path from "node:path";
import { migrate, openDatabase } from "../server/database.mjs";
import { appEnvironment, portFrom } from "../server/environment.mjs";
import { dataFolder, projectFolder } from "../server/folders.mjs";
import { accountUrls } from "../server/mariadb.mjs";
import { findOccupant, occupy } from "../server/occupancy.mjs";
import { checkNode, ensurePackages } from "../server/packages.mjs";
import { Refusal, runCommand } from "../server/refusal.mjs";
import { runScript } from "../server/scripts.mjs";
import { runSession } from "../server/session.mjs";

/** Scripts put mail into the outbox and leave sending to the app, so without one running any address will do. */
const nobody = "smtp://127.0.0.1:1";

const [script, ...args] = process.argv.slice(2);

/**
 * Runs a TypeScript command on the database: the outside one, the one that `npm start` runs now, or else the
 * project's own, started for as long as the command takes.
 * @param {import("../server/session.mjs").Session} session
 */
async function run(session) {
  if (!script) throw new Refusal("usage: node db/commands/run.mjs <script.ts> [arguments]");
  if (!existsSync(path.join(projectFolder, script))) throw new Refusal(`There is no ${script}.`);
  checkNode();
  await ensurePackages({ forBuilding: false, signal: session.signal });

  const { env } = process;
  const folder = dataFolder(env);
  const occupant = env.DATABASE_URL ? undefined : findOccupant(folder);
  const scriptEnv = occupant?.appUrl
    ? joinRunning(folder, occupant)
    : await prepareOwn(folder, session, path.basename(script, ".ts"));
  return runScript(script, args, scriptEnv, session.signal);
}

/**
 * @param {string} folder
 * @param {import("../server/occupancy.mjs").Occupant} occupant
 */
function joinRunning(folder, { databasePort, appUrl, smtpUrl }) {
  if (!databasePort) {
    throw new Refusal(`The app at ${appUrl} works on an outside database: set DATABASE_URL here, too.`);
  }
  return appEnvironment({
    env: { ...process.env, APP_URL: process.env.APP_URL || appUrl },
    folder,
    port: portFrom(process.env) ?? 3000,
    databaseUrl: accountUrls(folder, databasePort).url,
    smtpUrl: process.env.SMTP_URL || smtpUrl || nobody,
  });
}

/**
 * @param {string} folder
 * @param {import("../server/session.mjs").Session} session
 * @param {string} command
 */
async function prepareOwn(folder, session, command) {
  const { env } = process;
  const occupancy = env.DATABASE_URL ? undefined : await occupy(folder, command);
  if (occupancy) session.onEnd("The data folder's record", occupancy.leave);
  const { url, ownerUrl } = await openDatabase({ folder, env, session, occupancy });
  const scriptEnv = appEnvironment({
    env,
    folder,
    port: portFrom(env) ?? 3000,
    databaseUrl: url,
    smtpUrl: env.SMTP_URL || nobody,
  });
  await migrate(scriptEnv, ownerUrl, session.signal);
  return scriptEnv;
}

await runCommand(() => runSession(run));
