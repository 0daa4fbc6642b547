import { installDebianPackages } from "./debian.mjs";
import { findProgram } from "./processes.mjs";
import { Refusal } from "./refusal.mjs";

/** @returns {Promise<string>} the browser's path, installed first where it is missing */
export async function ensureChromium() {
  const found = findProgram("chromium", ["/usr/bin"]);
  if (found) return found;
  await installDebianPackages("Chromium", ["chromium"]);
  const installed = findProgram("chromium", ["/usr/bin"]);
  if (!installed) throw new Refusal("Chromium was installed, but is not on PATH.");
  return installed;
}
