import path from "node:path";
import { pathToFileURL } from "node:url";
import type { Bench, Row } from "@/tests/support/bench";

/** Run by bench.mjs, once for each file of tests/bench: prints its rows, and exits 1 when one misses its limit. */
function print(rows: Row[]) {
  const width = (column: "name" | "measured") => Math.max(...rows.map((row) => row[column].length)) + 2;
  for (const { name, measured, limit, ok } of rows) {
    const verdict = ok ? "met   " : "MISSED";
    console.log(`${verdict}  ${name.padEnd(width("name"))}${measured.padEnd(width("measured"))}${limit}`);
  }
}

const [script] = process.argv.slice(2);
if (!script) throw new Error("usage: bench-one.ts <file>");
const bench: Bench = await import(pathToFileURL(path.resolve(script)).href);
const absent = (bench.needs ?? []).filter((name) => !process.env[name]);
if (absent.length > 0) {
  console.log(`Not run: it needs ${absent.join(" and ")}, given by --stream and --stream-fraud.`);
} else {
  const rows = await bench.run();
  print(rows);
  process.exitCode = rows.length > 0 && rows.every((row) => row.ok) ? 0 : 1;
}
