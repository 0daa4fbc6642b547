import { existsSync, readdirSync, readFileSync } from "node:fs";
import path from "node:path";

export const ROOT = path.resolve(import.meta.dirname, "../..");

export type Import = {
  /** As written. */
  from: string;
  /** Path inside the project without what does not matter to us; null for packages. */
  file: string | null;
  /** Erased by the compiler, so it brings nothing along. */
  typeOnly: boolean;
};
export type Source = { file: string; text: string; lines: string[]; imports: Import[] };

const FOLDERS = ["app", "components", "db", "e2e", "emails", "lib", "tests"];
const CODE = /\.(ts|tsx|mjs)$/;

/** Every source file of the project that people write, with what it imports. */
export function readSources(): Source[] {
  const atRoot = readdirSync(ROOT).filter(
    (name) => CODE.test(name) && !name.startsWith(".") && name !== "next-env.d.ts",
  );
  const inFolders = FOLDERS.flatMap((folder) =>
    readdirSync(path.join(ROOT, folder), { recursive: true, encoding: "utf8" })
      .filter((name) => CODE.test(name))
      .map((name) => path.posix.join(folder, name)),
  );
  return [...atRoot, ...inFolders].sort().map(readSource);
}

function readSource(file: string): Source {
  const text = readFileSync(path.join(ROOT, file), "utf8");
  return { file, text, lines: text.split("\n"), imports: importsOf(file, text) };
}

const IMPORT =
  /(?:^|\n)\s*(?:import|export)\s+(type\s)?(?:([^"'`;]*?)\sfrom\s+)?["']([^"']+)["']|import\(\s*["']([^"']+)["']\s*\)/g;

function importsOf(file: string, text: string): Import[] {
  return [...text.matchAll(IMPORT)].map(([, type, names, from, dynamic]) => {
    const target = from ?? dynamic ?? "";
    const isNamedTypes = names !== undefined && /^\{(\s*type\s[^,}]+,?)+\s*\}$/.test(names.trim());
    return { from: target, file: resolve(file, target), typeOnly: Boolean(type) || isNamedTypes };
  });
}

function resolve(file: string, target: string): string | null {
  const base = target.startsWith("@/")
    ? target.slice(2)
    : target.startsWith(".")
      ? path.posix.join(path.posix.dirname(file), target)
      : null;
  if (base === null) return null;
  const candidates = [base, `${base}.ts`, `${base}.tsx`, `${base}/index.ts`];
  return (
    candidates.find((candidate) => CODE.test(candidate) && existsSync(path.join(ROOT, candidate))) ?? base
  );
}

/** Shell files do I/O or know the clock; they say so on their first line. */
export const isShell = (source: Source): boolean => source.lines[0] === 'import "server-only";';

export const within = (folder: string) => (source: Source) => source.file.startsWith(`${folder}/`);

/** The domain of a file of lib: `lib/cases/read.ts` → "cases"; null for the single files beside the domains. */
export function domainOf(file: string): string | null {
  return /^lib\/([^/]+)\//.exec(file)?.[1] ?? null;
}
