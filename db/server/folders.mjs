import { mkdirSync, mkdtempSync, rmSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { fileURLToPath } from "node:url";

export const projectFolder = path.resolve(path.dirname(fileURLToPath(import.meta.url)), "../..");

/**
 * The folder that holds everything which outlives a run: database, secrets, caught mail, remembered ports.
 * @param {NodeJS.ProcessEnv} env
 */
export function dataFolder(env) {
  const folder = path.resolve(projectFolder, env.CUPEL_DATA_DIR || ".data");
  mkdirSync(folder, { recursive: true, mode: 0o700 });
  return folder;
}

/**
 * A folder for one run, outside the project so that no file watcher or build ever meets it.
 * @param {string} purpose
 */
export function throwAwayFolder(purpose) {
  const folder = mkdtempSync(path.join(tmpdir(), `cupel-${purpose}-`));
  return { folder, remove: () => rmSync(folder, { recursive: true, force: true }) };
}
