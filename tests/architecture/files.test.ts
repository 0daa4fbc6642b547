import { existsSync } from "node:fs";
import path from "node:path";
import { describe, expect, test } from "vitest";
import { readSources, type Source } from "./sources";

const sources = readSources();
const names = (found: readonly Source[]) => found.map((source) => source.file);

const LONGEST = 300;

test(`no file is longer than ${LONGEST} lines without saying why on its first`, () => {
  const long = sources.filter((source) => source.lines.length > LONGEST + 1);
  expect(names(long.filter((source) => !/^\/\/ Long: \S/.test(source.lines[0] ?? "")))).toEqual([]);
});

describe("names", () => {
  test("are in kebab case, but for those that Next and tools prescribe", () => {
    // Path parameters are fields of the API, and fields are in camel case.
    const good = /^([a-z0-9-]+(\.(test|spec|config|json))?|\[(\.\.\.)?[a-zA-Z]+\])$/;
    const isGood = (source: Source) =>
      source.file
        .replace(/\.(ts|tsx|mjs)$/, "")
        .split("/")
        .every((part) => good.test(part));
    expect(names(sources.filter((source) => !isGood(source)))).toEqual([]);
  });

  test("say what a file does, not that it helps", () => {
    const vague = /(^|[/-])(utils?|helpers?|common|managers?|services?|misc)([./-]|$)/;
    const allowed = new Set(["tests/support/services.ts"]);
    expect(names(sources.filter(({ file }) => vague.test(file) && !allowed.has(file)))).toEqual([]);
  });

  test("there is one barrel, the scorer's public face, beside the list of tables", () => {
    const barrels = sources.filter(({ file }) => path.posix.basename(file).startsWith("index."));
    expect(names(barrels)).toEqual(["db/schema/index.ts", "lib/scorer/index.ts"]);
  });
});

test("there are no server actions: the web client uses the same routes as everybody", () => {
  expect(names(sources.filter((source) => /^\s*["']use server["']/m.test(source.text)))).toEqual([]);
});

test("directives and the mark of shell files come before everything but comments", () => {
  const mark = /^(["']use client["']|import ["']server-only["'])/;
  const late = sources.filter(({ lines }) => {
    const at = lines.findIndex((line) => mark.test(line));
    return at > 0 && lines.slice(0, at).some((line) => !line.startsWith("//"));
  });
  expect(names(late)).toEqual([]);
});

test("nothing is commented away, skipped or left for later", () => {
  const left = /\b(TODO|FIXME)\b|\b(test|it|describe)\.(skip|only|todo)\(/;
  const self = "tests/architecture/files.test.ts";
  expect(names(sources.filter(({ file, text }) => file !== self && left.test(text)))).toEqual([]);
});

test("type checks are not switched off", () => {
  // `any` itself is refused by the linter.
  const off = /@ts-(ignore|nocheck|expect-error)|\bas unknown as\b/;
  const code = sources.filter(({ file }) => !file.startsWith("tests/architecture/"));
  expect(names(code.filter((source) => off.test(source.text)))).toEqual([]);
});

test("the top level is the one that the documents describe", () => {
  for (const folder of ["app", "components", "db", "lib", "emails", "tests", "e2e"]) {
    expect(existsSync(path.resolve(import.meta.dirname, "../..", folder))).toBe(true);
  }
});
