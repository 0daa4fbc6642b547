import { parse } from "csv-parse/sync";

/** A record of the file, or what is wrong with it; `line` is the first of its lines, counted from 1. */
export type CsvRecord = { line: number; cells: string[] } | { line: number; fault: string };

/** No cell of ours holds this much; a quote that is still open by then was a stray one. */
const LONGEST_RECORD_LINES = 50;
const LONGEST_RECORD_CHARS = 64 * 1024;

/**
 * Records of RFC 4180 from lines of text. A record whose quotes do not fit costs itself only: reading goes on at the
 * line behind its first, so that a stray quote cannot swallow the rows after it.
 */
export class CsvRecordReader {
  private readonly lines: string[] = [];
  private lineNumber = 1;

  /** Takes the next line in, without its ending. */
  *push(line: string): Generator<CsvRecord> {
    this.lines.push(line);
    yield* this.drain(false);
  }

  /** Says that there are no more lines. */
  *end(): Generator<CsvRecord> {
    yield* this.drain(true);
  }

  private *drain(ended: boolean): Generator<CsvRecord> {
    for (;;) {
      const taken = this.completeRecordLines(ended);
      if (taken === 0) return;
      const line = this.lineNumber;
      const parsed = parseRecord(this.lines.slice(0, taken).join("\n"));
      const used = "fault" in parsed ? 1 : taken;
      this.lines.splice(0, used);
      this.lineNumber += used;
      if (!("cells" in parsed) || !isBlank(parsed.cells)) yield { line, ...parsed };
    }
  }

  /** How many of the lines at hand make the next record; 0 while more are needed. */
  private completeRecordLines(ended: boolean): number {
    let quotes = 0;
    let chars = 0;
    for (const [index, line] of this.lines.entries()) {
      quotes += countQuotes(line);
      chars += line.length + 1;
      const tooLong = index + 1 >= LONGEST_RECORD_LINES || chars > LONGEST_RECORD_CHARS;
      if (quotes % 2 === 0 || tooLong) return index + 1;
    }
    return ended ? this.lines.length : 0;
  }
}

function parseRecord(text: string): { cells: string[] } | { fault: string } {
  if (text.length > LONGEST_RECORD_CHARS) return { fault: "is longer than 64 KB" };
  try {
    const [cells = []] = parse(text, { relax_column_count: true }) as string[][];
    return { cells };
  } catch (error) {
    return { fault: faultOf(error) };
  }
}

function faultOf(error: unknown): string {
  const code = error instanceof Error && "code" in error ? error.code : null;
  switch (code) {
    case "CSV_QUOTE_NOT_CLOSED":
      return "has a quote that is never closed";
    case "CSV_INVALID_CLOSING_QUOTE":
    case "INVALID_OPENING_QUOTE":
      return "has a stray quote; double it inside a quoted cell (RFC 4180)";
    default:
      throw error;
  }
}

function countQuotes(line: string): number {
  let count = 0;
  for (let at = line.indexOf('"'); at >= 0; at = line.indexOf('"', at + 1)) count += 1;
  return count;
}

const isBlank = (cells: string[]) => cells.length === 0 || (cells.length === 1 && cells[0]?.trim() === "");
