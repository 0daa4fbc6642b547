import { createReadStream } from "node:fs";
import { createInterface } from "node:readline";
import { createGunzip } from "node:zlib";

/** Rows of a plain CSV file without quotes, gzip or not, by the names of its header. */
export async function readRows(file: string): Promise<Record<string, string>[]> {
  const raw = createReadStream(file);
  const lines = createInterface({ input: file.endsWith(".gz") ? raw.pipe(createGunzip()) : raw });
  const rows: Record<string, string>[] = [];
  let header: string[] | null = null;
  for await (const line of lines) {
    const cells = line.split(",");
    if (header === null) header = cells;
    else rows.push(Object.fromEntries(header.map((name, index) => [name, cells[index] ?? ""])));
  }
  return rows;
}
