import { readFileSync } from "node:fs";
import path from "node:path";
import { projectFolder } from "./folders.mjs";

/**
 * Tells the person where to go, and as whom.
 * @param {{ appUrl: string, mailUrl?: string, people: Set<string> }} facts people by their addresses
 */
export function printWelcome({ appUrl, mailUrl, people }) {
  console.log(`\nCupel is ready:   ${appUrl}`);
  if (mailUrl) console.log(`Mail it sends:    ${mailUrl}`);
  const signIns = demoSignIns().filter(({ email }) => people.has(email));
  if (signIns.length > 0) console.log("Demo sign-ins:");
  for (const { role, email, password } of signIns) {
    console.log(`  ${role.replace("_", " ").padEnd(16)}${email.padEnd(34)}${password}`);
  }
  if (people.size === 0) {
    console.log("Nobody can sign in yet. To add somebody, type in another terminal:");
    console.log('  npm run person -- add you@example.org --name "Your name" --roles administrator');
  }
  console.log("Ctrl-C stops it; the data is kept.\n");
}

/** @returns {{ role: string, email: string, password: string }[]} */
function demoSignIns() {
  return JSON.parse(readFileSync(path.join(projectFolder, "db/demo/sign-ins.json"), "utf8"));
}
