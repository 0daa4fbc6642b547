/**
 * Population stability index, Σ (a − e)·ln(a/e) over the same bins: how far a distribution has moved. It is the
 * symmetric divergence of Jeffreys (1946). Common practice reads 0.1 as some and 0.25 as much.
 * @param expected counts or shares per bin of the reference, each above 0
 * @param actual counts or shares per bin of what is compared, each above 0
 * @throws RangeError for unequal lengths and empty bins, for which it is not defined
 */
export function populationStability(expected: ArrayLike<number>, actual: ArrayLike<number>): number {
  if (expected.length !== actual.length) throw new RangeError("Both distributions need the same bins");
  const total = (bins: ArrayLike<number>) => {
    let sum = 0;
    for (let i = 0; i < bins.length; i++) {
      if (!((bins[i] as number) > 0)) throw new RangeError(`Bin ${i} is empty`);
      sum += bins[i] as number;
    }
    return sum;
  };
  const [wholeExpected, wholeActual] = [total(expected), total(actual)];
  let sum = 0;
  for (let i = 0; i < expected.length; i++) {
    const e = (expected[i] as number) / wholeExpected;
    const a = (actual[i] as number) / wholeActual;
    sum += (a - e) * Math.log(a / e);
  }
  return sum;
}
