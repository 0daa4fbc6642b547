const DIGITS = 4;
const BUCKETS = 1 << 16;
/** Kept: a fresh quarter of a megabyte for every sort keeps the collector busy. */
const starts = new Uint32Array(BUCKETS);

/**
 * Positions of the keys, largest key first; equal keys keep their order. Keys are finite.
 * Radix sort over the bits of the doubles, O(n): a hundred thousand keys take some ten milliseconds, where a sort by
 * comparison would hold up everything else in the process for a good part of a second.
 */
export function sortDescending(keys: Float64Array): Uint32Array {
  const count = keys.length;
  const digits = descendingDigits(keys);
  let order = new Uint32Array(count);
  for (let i = 0; i < count; i++) order[i] = i;
  let other = new Uint32Array(count);
  for (let digit = 0; digit < DIGITS; digit++) {
    if (!fillStarts(digits, digit)) continue;
    for (let at = 0; at < count; at++) {
      const i = order[at] as number;
      const bucket = digits[DIGITS * i + digit] as number;
      const to = starts[bucket] as number;
      starts[bucket] = to + 1;
      other[to] = i;
    }
    [order, other] = [other, order];
  }
  return order;
}

/** Four 16-bit digits a key, lowest first, that count upwards as the key falls. */
function descendingDigits(keys: Float64Array): Uint16Array {
  const copy = new Float64Array(keys.length);
  // Adding 0 makes the negative zero a plain one, which it is equal to.
  for (let i = 0; i < copy.length; i++) copy[i] = (keys[i] as number) + 0;
  const words = new Uint32Array(copy.buffer);
  for (let high = 1; high < words.length; high += 2) {
    const bits = words[high] as number;
    // A negative double's bits already rise as it falls; those of the others are turned round and put in front.
    if (bits >>> 31 === 0) {
      words[high] = ~bits & 0x7fff_ffff;
      words[high - 1] = ~(words[high - 1] as number);
    }
  }
  return new Uint16Array(copy.buffer);
}

/** First position of each bucket; false where all keys share the digit, so that nothing moves. */
function fillStarts(digits: Uint16Array, digit: number): boolean {
  starts.fill(0);
  for (let at = digit; at < digits.length; at += DIGITS) {
    const bucket = digits[at] as number;
    starts[bucket] = (starts[bucket] as number) + 1;
  }
  const count = digits.length / DIGITS;
  if (count === 0 || starts[digits[digit] as number] === count) return false;
  let sum = 0;
  for (let bucket = 0; bucket < BUCKETS; bucket++) {
    const size = starts[bucket] as number;
    starts[bucket] = sum;
    sum += size;
  }
  return true;
}
