import "server-only";
import type { Executor } from "@/db/client";
import { Breath } from "../breath";
import { type Label, restoreScorer, type Scorer } from "../scorer";
import { foldedBy, foldStart, type PlaceRow, readPlaces } from "./fold";
import type { HeldScorer } from "./held-scorer";

/** Labels that hold otherwise than the log says, by place; 0: none. */
export type Overrides = ReadonlyMap<number, Label | 0>;

/**
 * Several folds of the log at once, each with overrides of its own, bit for bit as `foldLog` makes them one by one. The
 * log is read once; each leaves the common state where its first override stands.
 * @param variants none of them empty
 * @param goesOn asked at every page of the log; false ends it early
 * @returns in the order of the variants, or null when it was ended early
 */
export async function foldApart(
  db: Executor,
  held: HeldScorer,
  variants: readonly Overrides[],
  goesOn: () => Promise<boolean>,
): Promise<Scorer[] | null> {
  const firsts = variants.map((overrides) => Math.min(...overrides.keys()));
  const from = await foldStart(db, foldedBy(held), Math.min(...firsts), held.logSeq);
  const common = from.scorer;
  const apart = new Map<number, Scorer>();
  const breath = new Breath();
  for await (const rows of readPlaces(db, from, held.logSeq)) {
    for (const row of rows) {
      for (const [index, overrides] of variants.entries()) {
        if (firsts[index] === row.place) apart.set(index, restoreScorer(common.snapshot()));
        const scorer = apart.get(index);
        if (scorer) learn(scorer, row, overrides.get(row.place) ?? row.label);
        await breath.take();
      }
      learn(common, row, row.label);
    }
    if (!(await goesOn())) return null;
  }
  return variants.map((_, index) => apart.get(index) ?? common);
}

function learn(scorer: Scorer, { vector, weight }: PlaceRow, label: Label | 0): void {
  if (label !== 0) scorer.learn(vector, label, weight);
}
