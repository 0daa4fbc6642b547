import { readFileSync } from "node:fs";
import path from "node:path";
import { gunzipSync } from "node:zlib";

export interface Labelled {
  vectors: Float64Array[];
  labels: (1 | -1)[];
}

const FOLDER = path.join(import.meta.dirname, "../fixtures/scorer");

/** A table of numbers, row by row, each a record by column name. */
export function readTable(file: string, folder = FOLDER): Record<string, number>[] {
  const bytes = readFileSync(path.join(folder, file));
  const text = (file.endsWith(".gz") ? gunzipSync(bytes) : bytes).toString("utf8");
  const [head = "", ...lines] = text.trim().split("\n");
  const columns = head.split(",");
  return lines.map((line) => {
    const cells = line.split(",");
    return Object.fromEntries(columns.map((column, i) => [column, Number(cells[i])]));
  });
}

export function readSet(name: string, folder = FOLDER): Labelled {
  const rows = readTable(`${name}.csv.gz`, folder).map((row) => Object.values(row));
  return {
    vectors: rows.map((row) => Float64Array.from(row.slice(1))),
    labels: rows.map((row) => (row[0] === 1 ? 1 : -1)),
  };
}

/** The five fixed orders of a set, each a list of row numbers. */
export function readOrders(name: string, folder = FOLDER): number[][] {
  const rows = readTable(`${name}.orders.csv.gz`, folder);
  return [0, 1, 2, 3, 4].map((k) => rows.map((row) => row[`ord${k}`] as number));
}

export function inOrder({ vectors, labels }: Labelled, order: readonly number[]): Labelled {
  return {
    vectors: order.map((row) => vectors[row] as Float64Array),
    labels: order.map((row) => labels[row] as 1 | -1),
  };
}

/** Numbers in [0, 1), the same for the same seed (a 32-bit counter through a multiply-xorshift mix). */
export function seededNumbers(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 15), state | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 2 ** 32;
  };
}

/** Vectors with entries up to `scale` and a bias of 1 last; labels drawn from a logistic model that a seed fixes. */
export function drawLabelled(count: number, dimension: number, seed: number, scale = 1): Labelled {
  const next = seededNumbers(seed);
  const truth = Array.from({ length: dimension }, () => 4 * next() - 2);
  const vectors: Float64Array[] = [];
  const labels: (1 | -1)[] = [];
  for (let n = 0; n < count; n++) {
    const x = Float64Array.from({ length: dimension }, (_, i) =>
      i === dimension - 1 ? 1 : scale * (2 * next() - 1),
    );
    const margin = x.reduce((sum, value, i) => sum + value * (truth[i] as number), -1);
    vectors.push(x);
    labels.push(next() < 1 / (1 + Math.exp(-margin)) ? 1 : -1);
  }
  return { vectors, labels };
}
