import { createHash } from "node:crypto";
import {
  closeSync,
  existsSync,
  mkdirSync,
  openSync,
  readFileSync,
  renameSync,
  rmSync,
  statSync,
  writeFileSync,
} from "node:fs";
import { connect } from "node:net";
import { tmpdir } from "node:os";
import path from "node:path";
import { setTimeout as sleep } from "node:timers/promises";
import { installDebianPackages } from "./debian.mjs";
import { rememberedPort } from "./ports.mjs";
import { findProgram, runToEnd, startService } from "./processes.mjs";
import { Refusal } from "./refusal.mjs";
import { keptSecret } from "./secrets.mjs";

const schema = "cupel";
const startWaitMs = 120_000;

/** Rights of the account that migrates, and, without those that change the schema, of the one the app uses. */
const appRights = "SELECT, INSERT, UPDATE, DELETE, EXECUTE, CREATE TEMPORARY TABLES, LOCK TABLES";
const ownerRights = `${appRights}, CREATE, ALTER, DROP, INDEX, REFERENCES, TRIGGER, CREATE VIEW, SHOW VIEW, CREATE ROUTINE, ALTER ROUTINE`;

/**
 * @typedef {object} Mariadb
 * @property {number} port
 * @property {string} url of the app's account, which can change rows but not the schema
 * @property {string} ownerUrl of the account that migrates
 * @property {import("./processes.mjs").Service} service
 */

/** @returns {Promise<{ server: string, install: string }>} the programs, installed first where they are missing */
export async function ensureMariadb() {
  const found = findMariadb();
  if (found) return found;
  // The installer asks my_print_defaults, which Debian keeps in the client's package.
  await installDebianPackages("MariaDB 10.11", ["mariadb-server-core", "mariadb-client-core"]);
  const installed = findMariadb();
  if (!installed)
    throw new Refusal("MariaDB was installed, but its mariadbd is not on PATH or in /usr/sbin.");
  return installed;
}

function findMariadb() {
  const server = findProgram("mariadbd", ["/usr/sbin", "/usr/local/sbin"]);
  const install = findProgram("mariadb-install-db", ["/usr/bin", "/usr/local/bin"]);
  const defaults = findProgram("my_print_defaults", ["/usr/bin", "/usr/local/bin"]);
  return server && install && defaults ? { server, install } : undefined;
}

/**
 * Starts a MariaDB on loopback from the data folder, making its database first where there is none.
 * @param {string} folder the data folder
 * @param {{ fast?: boolean, signal?: AbortSignal, onSpawn?: (service: import("./processes.mjs").Service) => void }} [options]
 *   fast gives durability up, for databases that do not outlive a test run; the signal gives up waiting; onSpawn is
 *   told of the process before it is ready
 * @returns {Promise<Mariadb>}
 */
export async function startMariadb(folder, { fast = false, signal, onSpawn } = {}) {
  const programs = await ensureMariadb();
  const database = path.join(folder, "mariadb");
  if (!existsSync(database)) await initialise(programs.install, folder, database);
  const port = await rememberedPort(path.join(folder, "mariadb.port"));
  const log = path.join(folder, "mariadb.log");
  const output = openSync(log, "a", 0o600);
  const service = startService("MariaDB", programs.server, serverOptions({ folder, database, port, fast }), {
    output,
    stopWaitMs: 90_000,
  });
  closeSync(output);
  onSpawn?.(service);
  await untilItGreets(service, port, log, signal);
  return { port, ...accountUrls(folder, port), service };
}

/**
 * @param {string} folder the data folder
 * @param {number} port
 */
export function accountUrls(folder, port) {
  const address = `127.0.0.1:${port}/${schema}`;
  return {
    url: `mysql://cupel:${keptSecret(folder, "mariadb-app")}@${address}`,
    ownerUrl: `mysql://cupel_owner:${keptSecret(folder, "mariadb-owner")}@${address}`,
  };
}

/**
 * Fills a new folder and moves it into place, so that an interrupted start leaves nothing half made.
 * @param {string} install
 * @param {string} folder
 * @param {string} database
 */
async function initialise(install, folder, database) {
  const unfinished = `${database}.new`;
  rmSync(unfinished, { recursive: true, force: true });
  const accounts = path.join(folder, "accounts.sql");
  writeFileSync(accounts, accountsSql(folder), { mode: 0o600 });
  try {
    const options = [
      "--no-defaults",
      ...asRoot(),
      "--auth-root-authentication-method=normal",
      "--skip-test-db",
      "--skip-name-resolve",
      `--tmpdir=${temporaryFolder(folder)}`,
    ];
    const { code, output } = await runToEnd(
      install,
      [...options, `--extra-file=${accounts}`, `--datadir=${unfinished}`],
      { quiet: true },
    );
    if (code !== 0)
      throw new Refusal(`${output.trim()}\nMariaDB could not make its database in ${unfinished}.`);
    renameSync(unfinished, database);
  } finally {
    rmSync(accounts, { force: true });
  }
}

/**
 * A starting server deletes the temporary tables it finds, so that two must not share the system's folder.
 * @param {string} folder the data folder
 */
function temporaryFolder(folder) {
  const temporary = path.join(folder, "mariadb-tmp");
  mkdirSync(temporary, { recursive: true });
  return temporary;
}

/**
 * Two accounts on loopback. Names are reached over TCP, and every schema the owner makes starts with the same
 * word, so that tests can have one each.
 * @param {string} folder
 */
function accountsSql(folder) {
  return `FLUSH PRIVILEGES;
DELETE FROM mysql.global_priv WHERE User = 'root' AND Host <> 'localhost';
FLUSH PRIVILEGES;
ALTER USER 'root'@'localhost' IDENTIFIED BY '${keptSecret(folder, "mariadb-root")}';
CREATE DATABASE ${schema} CHARACTER SET utf8mb4 COLLATE utf8mb4_nopad_bin;
CREATE USER 'cupel'@'127.0.0.1' IDENTIFIED BY '${keptSecret(folder, "mariadb-app")}';
CREATE USER 'cupel_owner'@'127.0.0.1' IDENTIFIED BY '${keptSecret(folder, "mariadb-owner")}';
GRANT ${appRights} ON \`${schema}%\`.* TO 'cupel'@'127.0.0.1';
GRANT ${ownerRights} ON \`${schema}%\`.* TO 'cupel_owner'@'127.0.0.1';
`;
}

function asRoot() {
  return process.getuid?.() === 0 ? ["--user=root"] : [];
}

/** @param {{ folder: string, database: string, port: number, fast: boolean }} options */
function serverOptions({ folder, database, port, fast }) {
  const durability = fast
    ? ["--innodb-flush-log-at-trx-commit=0", "--skip-innodb-doublewrite", "--innodb-flush-method=nosync"]
    : ["--innodb-flush-log-at-trx-commit=1"];
  return [
    "--no-defaults",
    ...asRoot(),
    `--datadir=${database}`,
    `--tmpdir=${temporaryFolder(folder)}`,
    `--socket=${socketPath(database)}`,
    `--port=${port}`,
    "--bind-address=127.0.0.1",
    "--skip-name-resolve",
    "--skip-log-bin",
    "--default-time-zone=+00:00",
    "--character-set-server=utf8mb4",
    // Keys compare byte for byte, trailing spaces included.
    "--collation-server=utf8mb4_nopad_bin",
    "--transaction-isolation=READ-COMMITTED",
    "--innodb-buffer-pool-size=384M",
    "--max-allowed-packet=64M",
    "--max-connections=200",
    ...durability,
  ];
}

/**
 * A socket's path may hold 107 bytes, and one inside the project upsets the build's file watcher.
 * @param {string} database
 */
function socketPath(database) {
  const key = createHash("sha256").update(database).digest("hex").slice(0, 12);
  const folder = path.join(tmpdir(), `cupel-socket-${process.getuid?.() ?? 0}`);
  mkdirSync(folder, { recursive: true, mode: 0o700 });
  if (statSync(folder).uid !== process.getuid?.()) throw new Refusal(`${folder} belongs to somebody else.`);
  return path.join(folder, `${key}.sock`);
}

/**
 * MariaDB speaks first on a new connection, once it is ready (which after a crash may take a while).
 * @param {import("./processes.mjs").Service} service
 * @param {number} port
 * @param {string} log
 * @param {AbortSignal} [signal]
 */
async function untilItGreets(service, port, log, signal) {
  /** @type {string | undefined} */
  let ended;
  void service.ended.then((how) => (ended = how));
  const deadline = Date.now() + startWaitMs;
  while (!(await greets(port))) {
    if (ended)
      throw new Refusal(`MariaDB did not start (${ended}). Its log, ${log}, ends:\n${lastLines(log)}`);
    if (signal?.aborted || Date.now() > deadline) {
      await service.stop();
      signal?.throwIfAborted();
      throw new Refusal(`MariaDB was not ready after ${startWaitMs / 1000} s. Its log is ${log}.`);
    }
    await sleep(25);
  }
}

/**
 * @param {number} port
 * @returns {Promise<boolean>}
 */
function greets(port) {
  return new Promise((resolve) => {
    const socket = connect(port, "127.0.0.1");
    socket.setTimeout(2_000, () => socket.destroy());
    socket.once("data", () => {
      resolve(true);
      socket.destroy();
    });
    socket.once("error", () => resolve(false));
    socket.once("close", () => resolve(false));
  });
}

/** @param {string} log */
function lastLines(log) {
  return readFileSync(log, "utf8").trim().split("\n").slice(-8).join("\n");
}
