/**
 * The non-decreasing sequence nearest to the values in (weighted) squares, by pooling adjacent violators:
 * Ayer, Brunk, Ewing, Reid and Silverman, Annals of Mathematical Statistics 26 (1955). O(n).
 * @param weights one per value, positive; all 1 when left out
 * @throws RangeError for unequal lengths, values that are not finite and weights that are not positive
 */
export function isotonicFit(values: ArrayLike<number>, weights?: ArrayLike<number>): Float64Array {
  if (weights && weights.length !== values.length) throw new RangeError("One weight per value is needed");
  const blocks: { sum: number; weight: number; count: number }[] = [];
  for (let i = 0; i < values.length; i++) {
    const weight = weights?.[i] ?? 1;
    const value = values[i] as number;
    if (!(Number.isFinite(value) && weight > 0)) throw new RangeError(`Value or weight ${i} is unfit`);
    let block = { sum: weight * value, weight, count: 1 };
    for (let last = blocks.at(-1); last; last = blocks.at(-1)) {
      if (last.sum / last.weight < block.sum / block.weight) break;
      blocks.pop();
      block = {
        sum: last.sum + block.sum,
        weight: last.weight + block.weight,
        count: last.count + block.count,
      };
    }
    blocks.push(block);
  }
  const fit = new Float64Array(values.length);
  let at = 0;
  for (const { sum, weight, count } of blocks) {
    fit.fill(sum / weight, at, at + count);
    at += count;
  }
  return fit;
}
