import { readFileSync } from "node:fs";
import path from "node:path";
import { projectFolder } from "./folders.mjs";

/**
 * Tells the person where to go.
 * @param {{ appUrl: string, mailUrl?: string, demo: boolean }} facts
 */
export function printWelcome({ appUrl, mailUrl, demo }) {
  console.log(`\nCupel is ready:   ${appUrl}`);
  if (mailUrl) console.log(`Mail it sends:    ${mailUrl}`);
  if (demo) printSignIns();
  console.log("Ctrl-C stops it; the data is kept.\n");
}

function printSignIns() {
  const file = path.join(projectFolder, "db/demo/sign-ins.json");
  /** @type {{ role: string, email: string, password: string }[]} */
  const signIns = JSON.parse(readFileSync(file, "utf8"));
  console.log("Demo sign-ins:");
  for (const { role, email, password } of signIns) {
    console.log(`  ${role.replace("_", " ").padEnd(16)}${email.padEnd(34)}${password}`);
  }
}
