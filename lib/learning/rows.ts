/** How many of the rows, which stand in order, lie at or before a place of the log. */
export function countUpTo(rows: readonly { seq: number }[], seq: number): number {
  let low = 0;
  let high = rows.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((rows[middle] as { seq: number }).seq <= seq) low = middle + 1;
    else high = middle;
  }
  return low;
}
