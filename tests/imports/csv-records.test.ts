import { expect, test } from "vitest";
import { type CsvRecord, CsvRecordReader } from "@/lib/imports/csv-records";

function read(lines: string[]): CsvRecord[] {
  const reader = new CsvRecordReader();
  return [...lines.flatMap((line) => [...reader.push(line)]), ...reader.end()];
}

test("a quoted cell keeps its comma, its doubled quote and its line break (RFC 4180, section 2)", () => {
  expect(read(['a,"b""c","d,e","f', 'g",', "next,row"])).toEqual([
    { line: 1, cells: ["a", 'b"c', "d,e", "f\ng", ""] },
    { line: 3, cells: ["next", "row"] },
  ]);
});

test("a stray quote costs its own row only", () => {
  const rows = Array.from({ length: 120 }, (_, index) => `T-${index},10.00`);
  rows[7] = 'T-7,"10.00';
  const records = read(rows);
  expect(records).toHaveLength(120);
  expect(records[7]).toEqual({ line: 8, fault: "has a quote that is never closed" });
  expect(records.filter((record) => "cells" in record)).toHaveLength(119);
});

test("two stray quotes near each other each cost their own row only", () => {
  const rows = Array.from({ length: 20 }, (_, index) => `T-${index},10.00`);
  rows[3] = 'T-3,10"00';
  rows[9] = 'T-9,"10"00';
  const faults = read(rows).filter((record) => "fault" in record);
  expect(faults.map((record) => record.line)).toEqual([4, 10]);
});

test("blank lines are no rows, and the last line needs no ending", () => {
  expect(read(["a,b", "", "   ", "c,d"])).toEqual([
    { line: 1, cells: ["a", "b"] },
    { line: 4, cells: ["c", "d"] },
  ]);
});
