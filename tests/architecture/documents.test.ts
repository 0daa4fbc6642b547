import { existsSync, readFileSync } from "node:fs";
import { expect, test } from "vitest";

const TOP = "app|components|db|lib|emails|tests|e2e";

/** Paths in backticks and pictures, without globs and placeholders. */
function pathsIn(text: string): string[] {
  const named = [...text.matchAll(/`([^`\s]+)`/g), ...text.matchAll(/!\[[^\]]*\]\(([^)]+)\)/g)].map(
    ([, path]) => path as string,
  );
  return named.filter((path) => new RegExp(`^(${TOP})/[\\w./[\\]-]*$`).test(path));
}

test.each(["README.md", "DEVELOPERS.md"])("every path that %s names is there", (file) => {
  const paths = pathsIn(readFileSync(file, "utf8"));
  expect(paths.length).toBeGreaterThan(4);
  expect(paths.filter((path) => !existsSync(path))).toEqual([]);
});
