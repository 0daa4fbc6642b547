import { writeFileSync } from "node:fs";
import type { SerializedError } from "vitest";
import type { Reporter, TestModule } from "vitest/node";

/**
 * Writes what `npm test` adds up to the file named by CUPEL_COUNTS_FILE. Vitest's own JSON leaves out why a test
 * was skipped, and the errors that belong to no test.
 */
export default class CountReporter implements Reporter {
  onTestRunEnd(modules: readonly TestModule[], strayErrors: readonly SerializedError[]) {
    const tests = modules.flatMap((module) => [...module.children.allTests()]);
    const suites = modules.flatMap((module) => [module, ...module.children.allSuites()]);
    const suiteErrors = suites.flatMap((suite) => suite.errors());
    const state = (wanted: string) => tests.filter((one) => one.result().state === wanted);
    const counts = {
      passed: state("passed").length,
      failed: state("failed").length + state("pending").length + suiteErrors.length + strayErrors.length,
      skipped: state("skipped").map((one) => {
        const result = one.result();
        return { name: one.fullName, reason: result.state === "skipped" ? (result.note ?? "") : "" };
      }),
    };
    const file = process.env.CUPEL_COUNTS_FILE;
    if (file) writeFileSync(file, JSON.stringify(counts));
  }
}
