import { findProgram, rootPrefix, runToEnd } from "./processes.mjs";
import { Refusal } from "./refusal.mjs";

/**
 * Installs Debian packages where this user may, or says in one line what to install.
 * @param {string} need what they are for, as a person would say it
 * @param {string[]} packages
 */
export async function installDebianPackages(need, packages) {
  const byHand = `Cupel needs ${need}: run "sudo apt-get install ${packages.join(" ")}", then try again.`;
  const aptGet = findProgram("apt-get");
  const prefix = rootPrefix();
  if (!aptGet || !prefix) throw new Refusal(byHand);
  console.log(`Installing ${need} (${packages.join(", ")}) …`);
  const steps = [
    [...prefix, aptGet, "update", "-qq"],
    [...prefix, aptGet, "install", "-y", "-qq", "--no-install-recommends", ...packages],
  ];
  for (const [command, ...args] of steps) {
    if (command === undefined) continue;
    const env = { ...process.env, DEBIAN_FRONTEND: "noninteractive" };
    const { code, output } = await runToEnd(command, args, { env, quiet: true });
    if (code !== 0) throw new Refusal(`${output.trim()}\n${byHand}`);
  }
}
