import { existsSync, readFileSync } from "node:fs";
import path from "node:path";
import { projectFolder } from "./folders.mjs";
import { runToEnd } from "./processes.mjs";
import { Refusal } from "./refusal.mjs";

/** @typedef {Record<string, { version?: string, dev?: boolean, optional?: boolean, devOptional?: boolean, peer?: boolean }>} LockedPackages */

/** @param {string} version such as "20.9.0" */
export function checkNode(version = process.versions.node) {
  const [major = 0, minor = 0] = version.split(".").map(Number);
  if (major > 20 || (major === 20 && minor >= 9)) return;
  throw new Refusal(`Cupel needs Node 20.9 or newer; this is Node ${version}.`);
}

/**
 * Installs the npm packages when any locked one is missing or of another version.
 * @param {{ forBuilding: boolean, signal?: AbortSignal }} options forBuilding asks for the development packages too
 */
export async function ensurePackages({ forBuilding, signal }) {
  const locked = readPackages("package-lock.json");
  if (!locked) throw new Refusal("package-lock.json is missing: this is not a whole copy of Cupel.");
  if (packagesFit(locked, readPackages("node_modules/.package-lock.json") ?? {}, forBuilding)) return;
  console.log("Installing npm packages …");
  const include = forBuilding ? ["--include=dev"] : [];
  const args = ["ci", ...include, "--no-audit", "--no-fund", "--no-update-notifier", "--loglevel=error"];
  const { code } = await runToEnd("npm", args, { cwd: projectFolder, signal });
  if (code !== 0) throw new Refusal("npm ci failed; its message is above.");
}

/**
 * @param {LockedPackages} locked
 * @param {LockedPackages} installed
 * @param {boolean} forBuilding
 */
export function packagesFit(locked, installed, forBuilding) {
  return Object.entries(locked).every(([where, one]) => {
    const needed = where !== "" && !one.optional && (forBuilding || !(one.dev || one.devOptional));
    return !needed || installed[where]?.version === one.version;
  });
}

/**
 * @param {string} file
 * @returns {LockedPackages | undefined}
 */
function readPackages(file) {
  const full = path.join(projectFolder, file);
  return existsSync(full) ? JSON.parse(readFileSync(full, "utf8")).packages : undefined;
}
