import { cpSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import path from "node:path";
import { afterAll, expect, test } from "vitest";
import { sourceHash } from "../../db/server/build.mjs";
import { browserCounts, counted } from "../../db/server/checks.mjs";
import { checkNode, packagesFit } from "../../db/server/packages.mjs";

const base = mkdtempSync(path.join(tmpdir(), "cupel-checks-"));
afterAll(() => rmSync(base, { recursive: true }));

const failure = { name: "a.test.ts adds up", error: "expected 1 to be 2" };

test("a runner that fails without a failing test, or leaves no report, counts as one failure", () => {
  const none = { passed: 3, failed: 0, skipped: [], failures: [] };
  expect(counted(1, none)).toEqual({ ...none, failed: 1 });
  expect(counted(1, { ...none, failed: 1, failures: [failure] })).toEqual({
    ...none,
    failed: 1,
    failures: [failure],
  });
  expect(counted(0, undefined)).toEqual({ ...none, passed: 0, failed: 1 });
});

test("a skip needs a reason, or it counts and is named as a failure", () => {
  const explained = { name: "a", reason: "no disk" };
  const skipped = [explained, { name: "b", reason: "" }];
  expect(counted(0, { passed: 1, failed: 0, skipped, failures: [] })).toEqual({
    passed: 1,
    failed: 1,
    skipped: [explained],
    failures: [{ name: "b", error: "skipped without a reason" }],
  });
});

test("browser results are counted through nested suites; flaky ones and the runner's errors fail by name", () => {
  const result = (
    title: string,
    status: string,
    annotations: { type: string; description: string }[] = [],
  ) => ({
    title,
    file: "desk.spec.ts",
    line: 7,
    tests: [
      {
        status,
        annotations,
        results: [{ errors: [{ message: `\u001b[31mError: ${title}\u001b[39m\nmore` }] }],
      },
    ],
  });
  const skip = [{ type: "skip", description: "why" }];
  const report = {
    errors: [{ message: "the server did not start" }],
    suites: [
      { title: "file", specs: [result("a", "expected"), result("b", "unexpected")] },
      {
        title: "file",
        suites: [{ title: "group", specs: [result("c", "flaky"), result("d", "skipped", skip)] }],
      },
    ],
  };
  expect(browserCounts(report)).toEqual({
    passed: 1,
    failed: 3,
    skipped: [{ name: "d", reason: "why" }],
    failures: [
      { name: "desk.spec.ts:7 b", error: "Error: b" },
      { name: "desk.spec.ts:7 c", error: "Error: c" },
      { name: "The runner", error: "the server did not start" },
    ],
  });
});

test("packages are installed when one is missing or of another version, whatever the files' dates", () => {
  const locked = {
    "": { version: "1.0.0" },
    "node_modules/a": { version: "1.0.0" },
    "node_modules/b": { version: "2.0.0", dev: true },
    "node_modules/c": { version: "3.0.0", optional: true },
  };
  const installed = { "node_modules/a": { version: "1.0.0" } };
  expect(packagesFit(locked, installed, false)).toBe(true);
  expect(packagesFit(locked, installed, true)).toBe(false);
  expect(packagesFit(locked, { ...installed, "node_modules/b": { version: "2.0.0" } }, true)).toBe(true);
  expect(packagesFit(locked, { "node_modules/a": { version: "1.0.1" } }, false)).toBe(false);
  expect(packagesFit(locked, {}, false)).toBe(false);
});

test("Node below 20.9 is refused", () => {
  expect(() => checkNode("20.8.1")).toThrow(/needs Node 20\.9/);
  expect(() => checkNode("18.20.0")).toThrow(/this is Node 18/);
  for (const version of ["20.9.0", "20.20.2", "22.0.0"]) expect(() => checkNode(version)).not.toThrow();
});

test("the build's stamp follows the sources' content, and nothing else in the folder", () => {
  const folder = path.join(base, "project");
  mkdirSync(path.join(folder, "app"), { recursive: true });
  writeFileSync(path.join(folder, "app/page.tsx"), "one");
  writeFileSync(path.join(folder, "next.config.ts"), "config");
  const hash = sourceHash(folder);

  mkdirSync(path.join(folder, "tests"));
  writeFileSync(path.join(folder, "tests/page.test.ts"), "test");
  writeFileSync(path.join(folder, "notes.md"), "notes");
  expect(sourceHash(folder)).toBe(hash);

  cpSync(path.join(folder, "app/page.tsx"), path.join(folder, "app/other.tsx"));
  expect(sourceHash(folder)).not.toBe(hash);
  rmSync(path.join(folder, "app/other.tsx"));
  expect(sourceHash(folder)).toBe(hash);
  writeFileSync(path.join(folder, "app/page.tsx"), "two");
  expect(sourceHash(folder)).not.toBe(hash);
});
