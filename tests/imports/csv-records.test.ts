import { parse } from "csv-parse/sync";
import fc from "fast-check";
import { expect, test } from "vitest";
import { type CsvRecord, CsvRecordReader } from "@/lib/imports/csv-records";

function read(lines: string[]): CsvRecord[] {
  const reader = new CsvRecordReader();
  return [...lines.flatMap((line) => [...reader.push(line)]), ...reader.end()];
}

const cellsOf = (records: CsvRecord[]) =>
  records.map((record) => ("cells" in record ? record.cells : record));
const written = (cell: string) => (/[",\n]/.test(cell) ? `"${cell.replaceAll('"', '""')}"` : cell);
const rows = (count: number) => Array.from({ length: count }, (_, index) => `T-${index},10.00`);

test("a quoted cell keeps its comma, its doubled quote and its line break (RFC 4180, section 2)", () => {
  expect(read(['a,"b""c","d,e","f', 'g",', "next,row"])).toEqual([
    { line: 1, cells: ["a", 'b"c', "d,e", "f\ng", ""] },
    { line: 3, cells: ["next", "row"] },
  ]);
});

test("any table comes back cell by cell, as it does from csv-parse", () => {
  const cell = fc.string({
    unit: fc.constantFrom("a", "ü", '"', ",", "\n", " ", "'", "x"),
    minLength: 1,
    maxLength: 6,
  });
  const table = fc
    .integer({ min: 2, max: 5 })
    .chain((width) =>
      fc.array(fc.array(cell, { minLength: width, maxLength: width }), { minLength: 1, maxLength: 6 }),
    );
  fc.assert(
    fc.property(table, (given) => {
      const text = given.map((row) => row.map(written).join(",")).join("\n");
      const found = cellsOf(read(text.split("\n")));
      expect(found).toEqual(given);
      expect(found).toEqual(parse(text));
    }),
  );
});

test("a stray quote costs its own row only", () => {
  const lines = rows(120);
  lines[7] = 'T-7,"10.00';
  const records = read(lines);
  expect(records).toHaveLength(120);
  expect(records[7]).toEqual({ line: 8, fault: "has a quote that is never closed" });
  expect(records.filter((record) => "cells" in record)).toHaveLength(119);
});

test("two stray quotes near each other each cost their own row only", () => {
  const lines = rows(20);
  lines[3] = 'T-3,10"00';
  lines[9] = 'T-9,"10"00';
  const faults = read(lines).filter((record) => "fault" in record);
  expect(faults.map((record) => record.line)).toEqual([4, 10]);
});

test("two stray quotes that look like one long cell do not swallow the rows between them", () => {
  const lines = rows(20);
  lines[3] = 'T-3,"10.00,EUR';
  lines[9] = 'T-9,10.00",EUR';
  const records = read(lines);
  expect(records).toHaveLength(20);
  expect(records.filter((record) => "fault" in record).map((record) => record.line)).toEqual([4, 10]);
});

test("a stray quote in a bare cell is told from one that is never closed", () => {
  expect(read(["a,b", 'x,5" pipe,"y"'])).toEqual([
    { line: 1, cells: ["a", "b"] },
    { line: 2, fault: "has a stray quote; double it inside a quoted cell (RFC 4180)" },
  ]);
});

test("blank lines are no rows, and the last line needs no ending", () => {
  expect(read(["a,b", "", "   ", "c,d"])).toEqual([
    { line: 1, cells: ["a", "b"] },
    { line: 4, cells: ["c", "d"] },
  ]);
});

test("a row whose bytes were no UTF-8 says so", () => {
  const latin1 = new TextDecoder().decode(Uint8Array.from([0x4d, 0xfc, 0x6c, 0x6c, 0x65, 0x72]));
  expect(read(["name,place", `${latin1},Ulm`])[1]).toEqual({ line: 2, fault: "is not text in UTF-8" });
});

test("a record of more than 64 KB, or one that is open for more than 50 lines, costs its first line", () => {
  const long = read(["a,b", `x,${"y".repeat(70_000)}`, "c,d"]);
  expect(long[1]).toEqual({ line: 2, fault: "is longer than 64 KB" });
  expect(long[2]).toEqual({ line: 3, cells: ["c", "d"] });
  const open = read(['"a,b', ...rows(60)]);
  expect(open[0]).toEqual({ line: 1, fault: "has a quote that is never closed" });
  expect(open).toHaveLength(61);
});
