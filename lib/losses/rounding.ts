/**
 * Numerator over denominator to the nearest integer, halves to the even neighbour (the rounding of IEEE 754
 * and of most ledgers): 5/2 → 2, 7/2 → 4, −5/2 → −2.
 * @throws RangeError where the denominator is not positive
 */
export function divideHalfEven(numerator: bigint, denominator: bigint): bigint {
  if (denominator <= 0n) throw new RangeError("The denominator must be positive");
  const negative = numerator < 0n;
  const size = negative ? -numerator : numerator;
  const whole = size / denominator;
  const twiceRest = (size % denominator) * 2n;
  const up = twiceRest > denominator || (twiceRest === denominator && whole % 2n === 1n);
  const rounded = up ? whole + 1n : whole;
  return negative ? -rounded : rounded;
}

/**
 * A share of an amount in minor units, rounded half-even. The share is taken as the decimal it is written as
 * (0.02 is exactly 2/100), because its binary neighbour would tip exact halves to one side.
 * @throws RangeError where the share is negative or not finite
 */
export function shareOfAmount(amountMinor: number, share: number): number {
  const { numerator, denominator } = decimalFraction(share);
  return Number(divideHalfEven(BigInt(amountMinor) * numerator, denominator));
}

function decimalFraction(value: number): { numerator: bigint; denominator: bigint } {
  const match = /^(\d+)(?:\.(\d+))?(?:e([+-]\d+))?$/.exec(String(value));
  if (!match) throw new RangeError("A share must be a finite number, zero or more");
  const [, whole = "0", fraction = "", exponent = "0"] = match;
  const places = fraction.length - Number(exponent);
  const digits = BigInt(whole + fraction);
  return places >= 0
    ? { numerator: digits, denominator: 10n ** BigInt(places) }
    : { numerator: digits * 10n ** BigInt(-places), denominator: 1n };
}
