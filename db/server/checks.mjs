import { existsSync, readFileSync, writeFileSync } from "node:fs";
import path from "node:path";
import { buildApp } from "./build.mjs";
import { projectFolder } from "./folders.mjs";
import { runToEnd } from "./processes.mjs";

/**
 * What one step of the whole check found.
 * @typedef {{ passed: number, failed: number, skipped: { name: string, reason: string }[] }} Counts
 */

/**
 * Where a step runs: the environment without the person's settings, a folder for reports, and an end to it.
 * @typedef {{ env: NodeJS.ProcessEnv, folder: string, signal: AbortSignal }} Place
 */

/** @param {boolean} ok */
const one = (ok) => ({ passed: ok ? 1 : 0, failed: ok ? 0 : 1, skipped: [] });

/**
 * @param {string} program script of an installed package
 * @param {string[]} args
 * @param {Place} place
 */
async function runPackage(program, args, { env, signal }) {
  const script = path.join(projectFolder, "node_modules", program);
  const { code } = await runToEnd(process.execPath, [script, ...args], { cwd: projectFolder, env, signal });
  return code;
}

/**
 * Checks the types, with the routes' types made anew: those of an older build may name routes that are gone.
 * @param {Place} place
 * @returns {Promise<Counts>}
 */
export async function checkTypes(place) {
  if ((await runPackage("next/dist/bin/next", ["typegen"], place)) !== 0) return one(false);
  const config = path.join(place.folder, "tsconfig.json");
  const inProject = (/** @type {string} */ name) => path.join(projectFolder, name);
  const options = {
    extends: inProject("tsconfig.json"),
    compilerOptions: {
      incremental: false,
      types: ["node", "next", "next/image-types/global"],
      typeRoots: [inProject("node_modules/@types"), inProject("node_modules")],
    },
    include: ["**/*.ts", "**/*.tsx", "db/**/*.mjs", ".next-test/types/**/*.ts"].map(inProject),
    exclude: ["node_modules", "next-env.d.ts"].map(inProject),
  };
  writeFileSync(config, JSON.stringify(options));
  return one((await runPackage("typescript/bin/tsc", ["--noEmit", "-p", config], place)) === 0);
}

/**
 * @param {Place} place
 * @returns {Promise<Counts>}
 */
export async function checkLint(place) {
  return one((await runPackage("@biomejs/biome/bin/biome", ["check", "--error-on-warnings"], place)) === 0);
}

/**
 * @param {Place} place
 * @returns {Promise<Counts>}
 */
export async function checkBuild({ env, signal }) {
  return one((await buildApp(env, signal)) === 0);
}

/**
 * @param {"unit" | "http"} project
 * @param {Place} place
 * @returns {Promise<Counts>}
 */
export async function checkTests(project, place) {
  const report = path.join(place.folder, `${project}.json`);
  const reporters = ["--reporter=default", "--reporter=./tests/support/count-reporter.ts"];
  const env = { ...place.env, CUPEL_COUNTS_FILE: report };
  const code = await runPackage("vitest/vitest.mjs", ["run", "--project", project, ...reporters], {
    ...place,
    env,
  });
  return counted(code, existsSync(report) ? JSON.parse(readFileSync(report, "utf8")) : undefined);
}

/**
 * @param {Place} place
 * @returns {Promise<Counts>}
 */
export async function checkBrowser(place) {
  const report = path.join(place.folder, "browser.json");
  const env = { ...place.env, PLAYWRIGHT_JSON_OUTPUT_FILE: report };
  const code = await runPackage("@playwright/test/cli.js", ["test", "--reporter=list,json"], {
    ...place,
    env,
  });
  return counted(
    code,
    existsSync(report) ? browserCounts(JSON.parse(readFileSync(report, "utf8"))) : undefined,
  );
}

/**
 * A runner that failed without a failing test, or left no report, is a failure of its own. So is a test skipped
 * without a reason.
 * @param {number} code
 * @param {Counts | undefined} counts
 * @returns {Counts}
 */
export function counted(code, counts) {
  if (!counts) return one(false);
  const unexplained = counts.skipped.filter(({ reason }) => !reason);
  for (const { name } of unexplained) console.error(`Skipped without a reason: ${name}`);
  const failed = counts.failed + unexplained.length;
  return {
    passed: counts.passed,
    failed: failed === 0 && code !== 0 ? 1 : failed,
    skipped: counts.skipped.filter(({ reason }) => reason),
  };
}

/**
 * @typedef {{ title: string, specs?: Spec[], suites?: Suite[] }} Suite
 * @typedef {{ title: string, tests: { status: string, annotations: { type: string, description?: string }[] }[] }} Spec
 */

/**
 * @param {{ suites: Suite[], errors: unknown[] }} report Playwright's
 * @returns {Counts}
 */
export function browserCounts(report) {
  /** @type {(suite: Suite) => Spec[]} */
  const specsOf = (suite) => [...(suite.specs ?? []), ...(suite.suites ?? []).flatMap(specsOf)];
  const tests = report.suites
    .flatMap(specsOf)
    .flatMap((spec) => spec.tests.map((test) => ({ ...test, name: spec.title })));
  const skipped = tests.filter(({ status }) => status === "skipped");
  return {
    passed: tests.filter(({ status }) => status === "expected").length,
    failed:
      tests.filter(({ status }) => status === "unexpected" || status === "flaky").length +
      report.errors.length,
    skipped: skipped.map(({ name, annotations }) => ({
      name,
      reason: annotations.find(({ type }) => type === "skip" || type === "fixme")?.description ?? "",
    })),
  };
}
