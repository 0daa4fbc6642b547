import path from "node:path";
import { projectFolder } from "./folders.mjs";
import { runToEnd } from "./processes.mjs";

/**
 * Runs a TypeScript file of the project to its end. The tsconfig named here maps `@/` and stands in for
 * `server-only`, which Next would otherwise resolve.
 * @param {string} script path inside the project
 * @param {string[]} args
 * @param {NodeJS.ProcessEnv} env
 * @param {AbortSignal} [signal]
 * @returns {Promise<number>} its exit code
 */
export async function runScript(script, args, env, signal) {
  const { code } = await runToEnd(process.execPath, ["--import", "tsx", script, ...args], {
    cwd: projectFolder,
    env: { ...env, TSX_TSCONFIG_PATH: path.join(projectFolder, "db/commands/tsconfig.json") },
    signal,
  });
  return code;
}
