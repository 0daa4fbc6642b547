/** Numbers in [0, 1), the same for the same seed: a 32-bit counter through two rounds of multiply and shift. */
export function seededUnit(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x9e3779b9) >>> 0;
    let mixed = Math.imul(state ^ (state >>> 16), 0x21f0aaad);
    mixed = Math.imul(mixed ^ (mixed >>> 15), 0x735a2d97);
    return ((mixed ^ (mixed >>> 15)) >>> 0) / 2 ** 32;
  };
}

/** Beyond this mean, the normal distribution stands in for the Poisson distribution. */
const SMALL_MEAN = 20;

/** A Poisson count of the mean: by inversion (Knuth, Seminumerical Algorithms 3.4.1), rounded normal for a large mean. */
export function poissonCount(mean: number, unit: () => number): number {
  if (mean <= 0) return 0;
  if (mean > SMALL_MEAN) {
    const radius = Math.sqrt(-2 * Math.log(1 - unit()));
    return Math.max(0, Math.round(mean + Math.sqrt(mean) * radius * Math.cos(2 * Math.PI * unit())));
  }
  let chance = Math.exp(-mean);
  let left = unit() - chance;
  let count = 0;
  while (left >= 0 && chance > 0) {
    count += 1;
    chance *= mean / count;
    left -= chance;
  }
  return count;
}
