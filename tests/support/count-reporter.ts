import { writeFileSync } from "node:fs";
import type { SerializedError } from "vitest";
import type { Reporter, TestModule, TestSuite } from "vitest/node";
import { firstLine } from "../../db/server/checks.mjs";

/**
 * Writes what `npm test` adds up to the file named by CUPEL_COUNTS_FILE. Vitest's own JSON leaves out why a test
 * was skipped, and the errors that belong to no test.
 */
export default class CountReporter implements Reporter {
  onTestRunEnd(modules: readonly TestModule[], strayErrors: readonly SerializedError[]) {
    const tests = modules.flatMap((module) => [...module.children.allTests()]);
    const suites = modules.flatMap((module) => [module, ...module.children.allSuites()]);
    const state = (wanted: string) => tests.filter((one) => one.result().state === wanted);
    const failures = [
      ...state("failed").map((one) => failure(one.module, one.fullName, one.result().errors?.[0])),
      ...state("pending").map((one) => failure(one.module, one.fullName, { message: "did not end" })),
      ...suites.flatMap((suite) => suite.errors().map((error) => failure(...placeOf(suite), error))),
      ...strayErrors.map((error) => ({ name: "Outside any test", error: firstLine(error.message) })),
    ];
    const counts = {
      passed: state("passed").length,
      failed: failures.length,
      skipped: state("skipped").map((one) => {
        const result = one.result();
        return { name: one.fullName, reason: result.state === "skipped" ? (result.note ?? "") : "" };
      }),
      failures,
    };
    const file = process.env.CUPEL_COUNTS_FILE;
    if (file) writeFileSync(file, JSON.stringify(counts));
  }
}

function failure(module: TestModule, name: string, error: { message?: string } | undefined) {
  return { name: `${module.relativeModuleId} ${name}`, error: firstLine(error?.message) };
}

function placeOf(suite: TestModule | TestSuite): [TestModule, string] {
  return suite.type === "module" ? [suite, "(the file)"] : [suite.module, suite.fullName];
}
