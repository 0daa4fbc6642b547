import { readdirSync } from "node:fs";
import path from "node:path";
import { parseArgs } from "node:util";
import { migrate, openDatabase } from "../server/database.mjs";
import { appEnvironment, checkEnvironment } from "../server/environment.mjs";
import { projectFolder, throwAwayFolder } from "../server/folders.mjs";
import { checkNode, ensurePackages } from "../server/packages.mjs";
import { freePort } from "../server/ports.mjs";
import { Refusal, runCommand } from "../server/refusal.mjs";
import { runScript } from "../server/scripts.mjs";
import { runSession } from "../server/session.mjs";

const folderOfBenches = "tests/bench";
const usage =
  "usage: npm run bench -- [--only <name>]... [--stream <transactions file>] [--stream-fraud <fraud file>]";

function readOptions() {
  try {
    return parseArgs({
      options: {
        only: { type: "string", multiple: true, default: [] },
        stream: { type: "string" },
        "stream-fraud": { type: "string" },
      },
    }).values;
  } catch (error) {
    throw new Refusal(`${error instanceof Error ? error.message : error}\n${usage}`);
  }
}

/** @param {string[]} only */
function chooseBenches(only) {
  const files = readdirSync(path.join(projectFolder, folderOfBenches)).filter((file) => file.endsWith(".ts"));
  const names = files.map((file) => path.basename(file, ".ts")).sort();
  const unknown = only.filter((name) => !names.includes(name));
  if (unknown.length > 0)
    throw new Refusal(`No benchmark ${unknown.join(", ")}. There are: ${names.join(", ")}`);
  return only.length > 0 ? only : names;
}

/**
 * One benchmark in a process and on a database of its own, MariaDB being set up as in production.
 * @param {string} name
 * @param {NodeJS.ProcessEnv} env
 * @param {import("../server/session.mjs").Session} session
 */
async function runOne(name, env, session) {
  console.log(`\n=== ${name}`);
  const { folder, remove } = throwAwayFolder("bench");
  session.onEnd("The benchmark's folder", remove);
  const { url, ownerUrl } = await openDatabase({ folder, env, session });
  const port = await freePort();
  const benchEnv = {
    ...appEnvironment({ env, folder, port, databaseUrl: url, smtpUrl: "smtp://127.0.0.1:1" }),
    CUPEL_OWNER_URL: ownerUrl,
  };
  await migrate(benchEnv, ownerUrl, session.signal);
  const script = path.posix.join(folderOfBenches, `${name}.ts`);
  return runScript("db/commands/bench-one.ts", [script], benchEnv, session.signal);
}

async function bench() {
  const options = readOptions();
  checkNode();
  await ensurePackages({ forBuilding: true });
  const env = checkEnvironment(process.env);
  env.CUPEL_DEMO = "0";
  // npm runs us in the project's folder; the paths are meant from where the person stands.
  const from = process.env.INIT_CWD ?? process.cwd();
  if (options.stream) env.CUPEL_STREAM = path.resolve(from, options.stream);
  if (options["stream-fraud"]) env.CUPEL_STREAM_FRAUD = path.resolve(from, options["stream-fraud"]);

  /** @type {string[]} */
  const missed = [];
  for (const name of chooseBenches(options.only)) {
    const code = await runSession((session) => runOne(name, env, session));
    if (code === 130) return code;
    if (code !== 0) missed.push(name);
  }
  console.log(missed.length > 0 ? `\nMissed or failed: ${missed.join(", ")}` : "\nEvery limit was met.");
  return missed.length > 0 ? 1 : 0;
}

await runCommand(bench);
