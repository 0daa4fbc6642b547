import { createHash } from "node:crypto";
import { existsSync, readdirSync, readFileSync, rmSync, statSync, writeFileSync } from "node:fs";
import path from "node:path";
import { projectFolder } from "./folders.mjs";
import { runToEnd } from "./processes.mjs";

const next = path.join(projectFolder, "node_modules/next/dist/bin/next");
const builtFolders = ["app", "components", "db", "emails", "lib", "public"];
const builtFiles = /^(package-lock\.json|tsconfig\.json|.+\.(ts|tsx|mjs))$/;

/** What the app is built from, by content. */
export function sourceHash(folder = projectFolder) {
  const hash = createHash("sha256");
  const files = readdirSync(folder).filter((name) => builtFiles.test(name) && name !== "next-env.d.ts");
  for (const file of [...files.sort(), ...builtFolders.flatMap((inside) => filesIn(folder, inside))]) {
    hash
      .update(file)
      .update("\0")
      .update(readFileSync(path.join(folder, file)))
      .update("\0");
  }
  return hash.digest("hex");
}

/**
 * @param {string} folder
 * @param {string} inside
 */
function filesIn(folder, inside) {
  const full = path.join(folder, inside);
  if (!existsSync(full)) return [];
  const paths = readdirSync(full, { recursive: true, encoding: "utf8" }).map((name) =>
    path.join(inside, name),
  );
  return paths.filter((name) => statSync(path.join(folder, name)).isFile()).sort();
}

/** @param {NodeJS.ProcessEnv} env */
const stampOf = (env) => path.join(projectFolder, env.CUPEL_BUILD_DIR || ".next", "cupel-sources");

/** @param {NodeJS.ProcessEnv} env */
export function isBuildFresh(env) {
  const stamp = stampOf(env);
  return existsSync(stamp) && readFileSync(stamp, "utf8") === sourceHash();
}

/**
 * Builds the app, and stamps the build with its sources' hash once it is whole.
 * @param {NodeJS.ProcessEnv} env
 * @param {AbortSignal} [signal]
 * @returns {Promise<number>} exit code
 */
export async function buildApp(env, signal) {
  const hash = sourceHash();
  rmSync(stampOf(env), { force: true });
  const { code } = await runToEnd(process.execPath, [next, "build"], {
    cwd: projectFolder,
    env: { ...env, NODE_ENV: "production", NEXT_TELEMETRY_DISABLED: "1" },
    signal,
  });
  if (code === 0) writeFileSync(stampOf(env), hash);
  return code;
}
