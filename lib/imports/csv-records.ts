/** A record of the file, or what is wrong with it; `line` is the first of its lines, counted from 1. */
export type CsvRecord = { line: number; cells: string[] } | { line: number; fault: string };

/** No cell of ours holds this much; a quote that is still open by then was a stray one. */
const LONGEST_RECORD_LINES = 50;
const LONGEST_RECORD_CHARS = 64 * 1024;

/**
 * Records of RFC 4180 from lines of text, in the browser as on the server. A record whose quotes do not fit costs
 * itself only: reading goes on at the line behind its first, so that a stray quote cannot swallow the rows after it.
 */
export class CsvRecordReader {
  private readonly lines: string[] = [];
  private lineNumber = 1;
  /** Cells of the first sound record. */
  private width: number | null = null;

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
      const parsed = this.parse(taken);
      const used = "fault" in parsed ? 1 : taken;
      this.lines.splice(0, used);
      this.lineNumber += used;
      if (!("cells" in parsed) || !isBlank(parsed.cells)) yield { line, ...parsed };
    }
  }

  private parse(lines: number): { cells: string[] } | { fault: string } {
    const parsed = parseRecord(this.lines.slice(0, lines).join("\n"));
    if ("fault" in parsed || isBlank(parsed.cells)) return parsed;
    this.width ??= parsed.cells.length;
    // Two stray quotes can look like one cell of several lines; such a record has lost cells.
    return lines > 1 && parsed.cells.length !== this.width ? { fault: NEVER_CLOSED } : parsed;
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

const NEVER_CLOSED = "has a quote that is never closed";
/** One cell and what ends it: a quoted one, in which quotes are doubled, or a bare one. */
const CELL = /(?:"((?:[^"]|"")*)"|([^",\r\n]*))(,|$)/y;

function parseRecord(text: string): { cells: string[] } | { fault: string } {
  if (text.length > LONGEST_RECORD_CHARS) return { fault: "is longer than 64 KB" };
  // The decoder puts this character where bytes were no UTF-8.
  if (text.includes("\uFFFD")) return { fault: "is not text in UTF-8" };
  if (!text.includes('"')) return { cells: text.split(",") };
  const cells: string[] = [];
  for (let from = 0; ; from = CELL.lastIndex) {
    CELL.lastIndex = from;
    const match = CELL.exec(text);
    if (!match) return { fault: faultAt(text, from) };
    const [, quoted, bare = "", end] = match;
    cells.push(quoted === undefined ? bare : quoted.replaceAll('""', '"'));
    if (end === "") return { cells };
  }
}

function faultAt(text: string, from: number): string {
  const isOpen = text[from] === '"' && countQuotes(text.slice(from)) % 2 === 1;
  return isOpen ? NEVER_CLOSED : "has a stray quote; double it inside a quoted cell (RFC 4180)";
}

function countQuotes(line: string): number {
  let count = 0;
  for (let at = line.indexOf('"'); at >= 0; at = line.indexOf('"', at + 1)) count += 1;
  return count;
}

const isBlank = (cells: string[]) => cells.length === 0 || (cells.length === 1 && cells[0]?.trim() === "");
