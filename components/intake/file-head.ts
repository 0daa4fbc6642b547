import { CsvRecordReader } from "@/lib/imports/csv-records";
import { LARGEST_FILE_BYTES, LARGEST_FILE_WORDS } from "@/lib/imports/limits";
import { holdsCardNumber } from "@/lib/transactions/card-number";

/** A column of the file; null stands for a cell that must not be shown. */
export type FileColumn = { name: string; samples: (string | null)[] };
export type FileHead = { columns: FileColumn[] } | { problem: string };

const SAMPLE_ROWS = 3;
/** Enough text for a header and some rows of any sound file. */
const HEAD_CHARS = 256 * 1024;
const COLUMNS_AT_MOST = 200;
const LONGEST_NAME = 200;

/** Reads the header and the first rows of a chosen file, here in the browser: nothing is sent yet. */
export async function readFileHead(file: File): Promise<FileHead> {
  if (file.size === 0) return { problem: "The file is empty." };
  if (file.size > LARGEST_FILE_BYTES) {
    return { problem: `The file is larger than ${LARGEST_FILE_WORDS}. Compress it with gzip, or split it.` };
  }
  const start = new Uint8Array(await file.slice(0, 4).arrayBuffer());
  if (start[0] === 0x50 && start[1] === 0x4b) {
    return { problem: "This is a spreadsheet or a ZIP archive. Save it as CSV first; gzip is fine." };
  }
  const isGzip = start[0] === 0x1f && start[1] === 0x8b;
  const text = await headText(file, isGzip);
  if (text === null) return { problem: "The gzip file is damaged: it cannot be unpacked." };
  return headOf(text);
}

/** The beginning of the text, up to its last whole line; null where it cannot be unpacked. */
async function headText(file: File, isGzip: boolean): Promise<string | null> {
  const bytes = isGzip ? file.stream().pipeThrough(new DecompressionStream("gzip")) : file.stream();
  const reader = bytes.getReader();
  const decoder = new TextDecoder();
  let text = "";
  try {
    while (text.length < HEAD_CHARS) {
      const { done, value } = await reader.read();
      if (done) return text + decoder.decode();
      text += decoder.decode(value, { stream: true });
    }
    await reader.cancel();
  } catch {
    // A file that was cut off still shows its beginning; the import says what became of the rest.
    if (text === "") return null;
  }
  return text.slice(0, text.lastIndexOf("\n") + 1);
}

function headOf(text: string): FileHead {
  const [header, ...rows] = recordsOf(text, SAMPLE_ROWS + 1);
  if (!header) return { problem: "The file has no line that could be a header." };
  if ("fault" in header)
    return { problem: `This does not look like a CSV file: its first line ${header.fault}.` };
  const names = header.cells.map((cell) => cell.trim());
  const problem = problemOf(names);
  if (problem) return { problem };
  const sound = rows.flatMap((row) => ("cells" in row ? [row.cells] : []));
  return {
    columns: names.map((name, index) => ({ name, samples: sound.map((cells) => shown(cells[index] ?? "")) })),
  };
}

function recordsOf(text: string, atMost: number) {
  const reader = new CsvRecordReader();
  const records = [];
  for (const line of text.split("\n")) {
    for (const record of reader.push(line.endsWith("\r") ? line.slice(0, -1) : line)) {
      if (records.push(record) === atMost) return records;
    }
  }
  return [...records, ...reader.end()].slice(0, atMost);
}

function problemOf(names: readonly string[]): string | null {
  const [only = ""] = names;
  const mark = [";", "\t", "|"].find((one) => only.split(one).length > 2);
  if (names.length === 1 && mark !== undefined) {
    const word = { ";": "semicolons", "\t": "tabs", "|": "bars" }[mark];
    return `Cells must be set apart by commas; this file seems to use ${word}.`;
  }
  if (names.some(holdsCardNumber)) {
    return "The first line holds what looks like a payment card number. It must be a header, and no card number may come in.";
  }
  if (names.length > COLUMNS_AT_MOST) return `The file has more than ${COLUMNS_AT_MOST} columns.`;
  if (names.some((name) => name.length > LONGEST_NAME)) {
    return `The first line has a cell of more than ${LONGEST_NAME} characters; it does not look like a header.`;
  }
  return null;
}

const shown = (cell: string) => (holdsCardNumber(cell) ? null : cell.trim());
