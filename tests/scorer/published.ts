import type { Label } from "@/lib/scorer";
import { type Labelled, readTable } from "./fixture";

type Birth = Record<"age" | "lwt" | "smoke" | "ptl" | "ht" | "ui" | "ftv", number> & {
  race: [number, number];
};

/** The 189 births of Hosmer and Lemeshow (1989), a constant and the columns asked for; label 1 for a low weight. */
export function birthWeight(columns: (birth: Birth) => number[]): Labelled {
  const rows = readTable("birth-weight.csv");
  return {
    vectors: rows.map((row) => {
      const race: [number, number] = [row.race === 2 ? 1 : 0, row.race === 3 ? 1 : 0];
      return Float64Array.from([1, ...columns({ ...row, race } as Birth)]);
    }),
    labels: rows.map((row): Label => (row.low === 1 ? 1 : -1)),
  };
}
