import { randomBytes } from "node:crypto";
import { mkdirSync, readFileSync, writeFileSync } from "node:fs";
import path from "node:path";

/**
 * The secret kept under this name, made on first use; only the owner may read it.
 * @param {string} dataFolder
 * @param {string} name
 */
export function keptSecret(dataFolder, name) {
  const folder = path.join(dataFolder, "secrets");
  mkdirSync(folder, { recursive: true, mode: 0o700 });
  const file = path.join(folder, name);
  try {
    writeFileSync(file, randomBytes(32).toString("hex"), { mode: 0o600, flag: "wx" });
  } catch (error) {
    if (!(error instanceof Error && "code" in error && error.code === "EEXIST")) throw error;
  }
  return readFileSync(file, "utf8").trim();
}
