import { readFileSync, renameSync, rmSync, writeFileSync } from "node:fs";
import path from "node:path";
import { identify, isAlive, stopProcess } from "./processes.mjs";
import { Refusal } from "./refusal.mjs";

/**
 * What the command now using a data folder says about itself.
 * @typedef {object} Occupant
 * @property {string} command
 * @property {import("./processes.mjs").Identity} owner
 * @property {(import("./processes.mjs").Identity & { name: string })[]} children
 * @property {number} [databasePort]
 * @property {string} [appUrl]
 * @property {string} [smtpUrl]
 * @property {string} [mailUrl]
 */

/**
 * @typedef {object} Occupancy
 * @property {(facts: Partial<Occupant>) => void} note
 * @property {(service: import("./processes.mjs").Service) => void} addChild notes a process to stop if we are killed
 * @property {() => void} leave
 */

/** @param {string} folder */
const recordOf = (folder) => path.join(folder, "running.json");

/**
 * @param {string} folder the data folder
 * @returns {Occupant | undefined} who uses it now
 */
export function findOccupant(folder) {
  const record = readRecord(folder);
  return record && isAlive(record.owner) ? record : undefined;
}

/**
 * Takes the data folder for one command. Left-over services of a command that was killed are stopped first.
 * @param {string} folder
 * @param {string} command as the person typed it
 * @returns {Promise<Occupancy>}
 * @throws {Refusal} when another command uses it
 */
export async function occupy(folder, command) {
  /** @type {Occupant} */
  let mine = { command, owner: identify(process.pid), children: [] };
  while (!createRecord(folder, mine)) {
    const other = readRecord(folder);
    if (!other) continue;
    if (isAlive(other.owner)) throw new Refusal(alreadyUsed(folder, other));
    console.log(`"${other.command}" (process ${other.owner.pid}) ended without tidying up; doing that now.`);
    for (const child of other.children.reverse()) await stopProcess(child, 90_000);
    rmSync(recordOf(folder), { force: true });
  }
  /** @param {Partial<Occupant>} facts */
  const note = (facts) => {
    mine = { ...mine, ...facts };
    const unfinished = `${recordOf(folder)}.new`;
    writeFileSync(unfinished, JSON.stringify(mine, null, 2), { mode: 0o600 });
    renameSync(unfinished, recordOf(folder));
  };
  return {
    note,
    addChild: ({ name, identity }) => note({ children: [...mine.children, { name, ...identity }] }),
    leave: () => rmSync(recordOf(folder), { force: true }),
  };
}

/**
 * @param {string} folder
 * @param {Occupant} other
 */
function alreadyUsed(folder, other) {
  const at = other.appUrl ? `, at ${other.appUrl}` : "";
  return `Cupel already runs here: "${other.command}" (process ${other.owner.pid}${at}) is using ${folder}. Stop that first, or set CUPEL_DATA_DIR to another folder.`;
}

/**
 * @param {string} folder
 * @param {Occupant} record
 */
function createRecord(folder, record) {
  try {
    writeFileSync(recordOf(folder), JSON.stringify(record, null, 2), { flag: "wx", mode: 0o600 });
    return true;
  } catch (error) {
    if (error instanceof Error && "code" in error && error.code === "EEXIST") return false;
    throw error;
  }
}

/**
 * @param {string} folder
 * @returns {Occupant | undefined}
 */
function readRecord(folder) {
  try {
    return JSON.parse(readFileSync(recordOf(folder), "utf8"));
  } catch (error) {
    if (error instanceof Error && "code" in error && error.code === "ENOENT") return undefined;
    throw error;
  }
}
