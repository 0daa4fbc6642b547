import { existsSync, readFileSync, writeFileSync } from "node:fs";
import path from "node:path";
import { stripVTControlCharacters } from "node:util";
import { buildApp } from "./build.mjs";
import { projectFolder } from "./folders.mjs";
import { runToEnd } from "./processes.mjs";

/**
 * What one step of the whole check found; `failures` names what a runner can name.
 * @typedef {{ name: string, error: string }} Failure
 * @typedef {{ passed: number, failed: number, skipped: { name: string, reason: string }[], failures: Failure[] }} Counts
 */

/**
 * Where a step runs: the environment without the person's settings, a folder for reports, and an end to it.
 * @typedef {{ env: NodeJS.ProcessEnv, folder: string, signal: AbortSignal }} Place
 */

/** @param {boolean} ok */
const one = (ok) => ({ passed: ok ? 1 : 0, failed: ok ? 0 : 1, skipped: [], failures: [] });

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
  const failed = counts.failed + unexplained.length;
  return {
    passed: counts.passed,
    failed: failed === 0 && code !== 0 ? 1 : failed,
    skipped: counts.skipped.filter(({ reason }) => reason),
    failures: [
      ...counts.failures,
      ...unexplained.map(({ name }) => ({ name, error: "skipped without a reason" })),
    ],
  };
}

/**
 * The first line of what went wrong, without a terminal's colours.
 * @param {string | undefined} message
 */
export function firstLine(message) {
  const [line = ""] = stripVTControlCharacters(message ?? "")
    .trim()
    .split("\n");
  return line;
}

/**
 * @typedef {{ title: string, specs?: Spec[], suites?: Suite[] }} Suite
 * @typedef {{ title: string, file: string, line: number, tests: SpecTest[] }} Spec
 * @typedef {object} SpecTest
 * @property {string} status
 * @property {{ type: string, description?: string }[]} annotations
 * @property {{ errors: { message?: string }[] }[]} results
 */

/**
 * @param {{ suites: Suite[], errors: { message?: string }[] }} report Playwright's
 * @returns {Counts}
 */
export function browserCounts(report) {
  /** @type {(suite: Suite) => Spec[]} */
  const specsOf = (suite) => [...(suite.specs ?? []), ...(suite.suites ?? []).flatMap(specsOf)];
  const tests = report.suites
    .flatMap(specsOf)
    .flatMap((spec) =>
      spec.tests.map((test) => ({ ...test, name: spec.title, place: `${spec.file}:${spec.line}` })),
    );
  const skipped = tests.filter(({ status }) => status === "skipped");
  const failed = tests.filter(({ status }) => status === "unexpected" || status === "flaky");
  return {
    passed: tests.filter(({ status }) => status === "expected").length,
    failed: failed.length + report.errors.length,
    skipped: skipped.map(({ name, annotations }) => ({
      name,
      reason: annotations.find(({ type }) => type === "skip" || type === "fixme")?.description ?? "",
    })),
    failures: [
      ...failed.map(({ place, name, results }) => ({
        name: `${place} ${name}`,
        error: firstLine(results.flatMap(({ errors }) => errors).find(({ message }) => message)?.message),
      })),
      ...report.errors.map(({ message }) => ({ name: "The runner", error: firstLine(message) })),
    ],
  };
}
