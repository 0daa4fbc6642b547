import { spawn, spawnSync } from "node:child_process";
import { existsSync, readFileSync } from "node:fs";
import path from "node:path";
import { setTimeout as sleep } from "node:timers/promises";

/**
 * A process told apart from a later one that happens to get its number.
 * @typedef {{ pid: number, startedAt: string }} Identity
 */

/**
 * @typedef {object} Service a long-running child
 * @property {string} name
 * @property {Identity} identity
 * @property {Promise<string>} ended resolves with "exit code 1" or "SIGKILL" once it is gone
 * @property {(waitMs?: number) => Promise<void>} stop
 */

/**
 * @param {number} pid
 * @returns {string | undefined} the start time in clock ticks since boot; undefined when there is no such process
 */
function startTicks(pid) {
  try {
    const stat = readFileSync(`/proc/${pid}/stat`, "utf8");
    // The command name, in brackets, may itself hold spaces and brackets: count fields after the last one.
    const fields = stat.slice(stat.lastIndexOf(")") + 2).split(" ");
    return fields[0] === "Z" ? undefined : fields[19];
  } catch {
    return undefined;
  }
}

/**
 * @param {number} pid
 * @returns {Identity}
 */
export function identify(pid) {
  return { pid, startedAt: startTicks(pid) ?? "gone" };
}

/** @param {Identity} identity */
export function isAlive(identity) {
  return startTicks(identity.pid) === identity.startedAt;
}

/**
 * Asks a process and its group to end, waits for the process to be gone, and kills what does not go.
 * @param {Identity} identity of a process that leads its own group
 * @param {number} waitMs
 */
export async function stopProcess(identity, waitMs) {
  const deadline = Date.now() + waitMs;
  signal(identity, "SIGTERM");
  while (isAlive(identity) && Date.now() < deadline) await sleep(20);
  if (!isAlive(identity)) return;
  console.error(`Process ${identity.pid} did not stop within ${waitMs / 1000} s and is killed.`);
  signal(identity, "SIGKILL");
  while (isAlive(identity)) await sleep(20);
}

/**
 * @param {Identity} identity
 * @param {NodeJS.Signals} name
 */
function signal(identity, name) {
  if (!isAlive(identity)) return;
  try {
    process.kill(-identity.pid, name);
  } catch (error) {
    if (!(error instanceof Error && "code" in error && error.code === "ESRCH")) throw error;
  }
}

/**
 * Starts a long-running child in a process group of its own, so that Ctrl-C reaches only us and the order of
 * stopping stays ours.
 * @param {string} name
 * @param {string} command
 * @param {string[]} args
 * @param {{ env?: NodeJS.ProcessEnv, cwd?: string, output?: "inherit" | "ignore" | number, stopWaitMs?: number }} options
 * @returns {Service}
 */
export function startService(name, command, args, { env, cwd, output = "inherit", stopWaitMs = 30_000 }) {
  // Where Debian's setpriv is, the kernel ends the child even if we are killed and cannot.
  const setpriv = findProgram("setpriv");
  const [program, allArgs] = setpriv
    ? [setpriv, ["--pdeathsig", "TERM", "--", command, ...args]]
    : [command, args];
  const child = spawn(program, allArgs, { env, cwd, detached: true, stdio: ["ignore", output, output] });
  /** @type {Promise<string>} */
  const ended = new Promise((resolve) => {
    child.once("error", (error) => resolve(error.message));
    child.once("exit", (code, signalName) => resolve(signalName ?? `exit code ${code}`));
  });
  const identity = identify(child.pid ?? 0);
  return {
    name,
    identity,
    ended,
    stop: async (waitMs = stopWaitMs) => {
      if (child.pid === undefined) return;
      await stopProcess(identity, waitMs);
      await ended;
    },
  };
}

/**
 * Runs a command to its end.
 * @param {string} command
 * @param {string[]} args
 * @param {{ env?: NodeJS.ProcessEnv, cwd?: string, quiet?: boolean, signal?: AbortSignal }} [options] quiet gives
 *   the output back instead of showing it; the signal ends the command
 * @returns {Promise<{ code: number, output: string }>}
 */
export function runToEnd(command, args, { env, cwd, quiet = false, signal } = {}) {
  signal?.throwIfAborted();
  const output = quiet ? "pipe" : "inherit";
  return new Promise((resolve, reject) => {
    const child = spawn(command, args, { env, cwd, signal, stdio: ["inherit", output, output] });
    let text = "";
    for (const stream of [child.stdout, child.stderr]) {
      stream?.on("data", (chunk) => {
        text += chunk;
      });
    }
    /** @type {Error | undefined} */
    let failure;
    child.once("error", (error) => {
      failure = error;
      if (child.pid === undefined) reject(error);
    });
    child.once("close", (code) => (failure ? reject(failure) : resolve({ code: code ?? 1, output: text })));
  });
}

/**
 * @param {string} name of a program
 * @param {string[]} alsoIn folders looked into beside PATH
 * @returns {string | undefined} its full path
 */
export function findProgram(name, alsoIn = []) {
  const folders = [...(process.env.PATH ?? "").split(path.delimiter), ...alsoIn];
  return folders.map((folder) => path.join(folder, name)).find((file) => existsSync(file));
}

/** How this user may act as root without being asked: directly, by sudo, or not at all. */
export function rootPrefix() {
  if (process.getuid?.() === 0) return [];
  const sudo = findProgram("sudo");
  return sudo && spawnSync(sudo, ["-n", "true"]).status === 0 ? [sudo, "-n"] : undefined;
}
