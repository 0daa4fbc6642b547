import { checkBrowser, checkBuild, checkLint, checkTests, checkTypes } from "../server/checks.mjs";
import { ensureChromium } from "../server/chromium.mjs";
import { checkEnvironment } from "../server/environment.mjs";
import { throwAwayFolder } from "../server/folders.mjs";
import { ensureMariadb } from "../server/mariadb.mjs";
import { checkNode, ensurePackages } from "../server/packages.mjs";
import { runCommand } from "../server/refusal.mjs";
import { runSession } from "../server/session.mjs";

/** @typedef {import("../server/checks.mjs").Counts} Counts */

/**
 * The whole check, on databases and folders of its own.
 * @param {import("../server/session.mjs").Session} session
 */
async function test({ signal, onEnd }) {
  checkNode();
  await ensureMariadb();
  await ensureChromium();
  await ensurePackages({ forBuilding: true, signal });
  const { folder, remove } = throwAwayFolder("check");
  onEnd("The check's folder", remove);
  const place = { env: checkEnvironment(process.env), folder, signal };

  const results = [
    await step("Types", () => checkTypes(place)),
    await step("Lint", () => checkLint(place)),
    await step("Unit and integration tests", () => checkTests("unit", place)),
  ];
  const build = await step("Build", () => checkBuild(place));
  /** @type {(run: () => Promise<Counts>) => () => Promise<Counts>} */
  const onBuild = (run) => (build.failed === 0 ? run : notRun);
  results.push(
    build,
    await step(
      "HTTP tests",
      onBuild(() => checkTests("http", place)),
    ),
    await step(
      "Browser tests",
      onBuild(() => checkBrowser(place)),
    ),
  );
  return report(results);
}

/** @returns {Promise<Counts>} */
async function notRun() {
  console.log("Not run, because the build failed.");
  return { passed: 0, failed: 1, skipped: [], failures: [{ name: "Not run", error: "the build failed" }] };
}

/**
 * @param {string} name
 * @param {() => Promise<Counts>} run
 */
async function step(name, run) {
  console.log(`\n=== ${name}`);
  const startedAt = performance.now();
  const counts = await run();
  const seconds = ((performance.now() - startedAt) / 1000).toFixed(1);
  console.log(`=== ${name}: ${counts.passed} passed, ${counts.failed} failed (${seconds} s)`);
  return { name, seconds, ...counts };
}

/** @param {(Counts & { name: string, seconds: string })[]} results */
function report(results) {
  const skipped = results.flatMap((result) => result.skipped);
  const passed = results.reduce((sum, result) => sum + result.passed, 0);
  const failed = results.reduce((sum, result) => sum + result.failed, 0);
  for (const { name, ...counts } of results) {
    if (counts.failed > 0) console.log(`\nFailed in ${name}:`);
    if (counts.failed > counts.failures.length) console.log("- see its own output above");
    for (const { name: test, error } of counts.failures) console.log(`- ${test}\n  ${error}`);
  }
  console.log("");
  for (const { name, seconds, ...counts } of results) {
    console.log(`${name.padEnd(28)}${counts.passed} passed, ${counts.failed} failed in ${seconds} s`);
  }
  for (const { name, reason } of skipped) console.log(`skipped: ${name} (${reason})`);
  console.log(
    `\n${passed} passed, ${failed} failed${skipped.length > 0 ? `, ${skipped.length} skipped` : ""}`,
  );
  return failed > 0 ? 1 : 0;
}

await runCommand(() => runSession(test));
