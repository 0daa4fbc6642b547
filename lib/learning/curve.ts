import type { CurvePoint } from "./learning-schema";
import { countUpTo } from "./rows";

const MOST_POINTS = 120;

/** A scorer's losses of the rows that it has come to, in their order. */
export type Line = { id: string; losses: Float64Array };

/**
 * Cumulative losses over the rows at no more than 120 of them: evenly spread, the last one, and those at which the
 * loss in hindsight is known.
 */
export function curveOf(
  rows: readonly { seq: number; at: Date }[],
  lines: readonly Line[],
  hindsightAt: ReadonlyMap<number, number>,
): CurvePoint[] {
  if (rows.length === 0) return [];
  const known = [...hindsightAt].flatMap(([seq, loss]) => {
    const index = countUpTo(rows, seq) - 1;
    return index < 0 ? [] : [[index, loss] as const];
  });
  const hindsight = new Map(known);
  const even = Math.max(1, MOST_POINTS - hindsight.size - 1);
  const chosen = new Set([rows.length - 1, ...hindsight.keys()]);
  for (let k = 1; k <= Math.min(even, rows.length); k++) {
    chosen.add(Math.ceil((k * rows.length) / Math.min(even, rows.length)) - 1);
  }
  const indices = [...chosen].sort((a, b) => a - b);
  const points = indices.map((index): CurvePoint => {
    const { seq, at } = rows[index] as { seq: number; at: Date };
    return { seq, at: at.toISOString(), losses: {}, hindsight: hindsight.get(index) ?? null };
  });
  for (const { id, losses } of lines) {
    let sum = 0;
    let next = 0;
    for (const [point, index] of indices.entries()) {
      if (index >= losses.length) break;
      for (; next <= index; next++) sum += losses[next] as number;
      (points[point] as CurvePoint).losses[id] = sum;
    }
  }
  return points;
}
