/** Seeded source of chance for the demo scenario: the same seed gives the same scenario. */
export class Chance {
  private state: number;

  constructor(seed: number) {
    this.state = seed >>> 0;
  }

  /** Uniform in [0, 1): a 32-bit counter passed through two multiply-and-shift rounds. */
  unit(): number {
    this.state = (this.state + 0x9e3779b9) >>> 0;
    let mixed = this.state;
    mixed = Math.imul(mixed ^ (mixed >>> 16), 0x21f0aaad);
    mixed = Math.imul(mixed ^ (mixed >>> 15), 0x735a2d97);
    return ((mixed ^ (mixed >>> 15)) >>> 0) / 2 ** 32;
  }

  whole(from: number, to: number): number {
    return from + Math.floor(this.unit() * (to - from + 1));
  }

  hits(probability: number): boolean {
    return this.unit() < probability;
  }

  pick<T>(items: readonly T[]): T {
    const item = items[Math.floor(this.unit() * items.length)];
    if (item === undefined) throw new RangeError("Nothing to pick from");
    return item;
  }

  /** Standard normal by the polar form of Box and Muller (1958), as Marsaglia gave it. */
  normal(): number {
    for (;;) {
      const u = 2 * this.unit() - 1;
      const v = 2 * this.unit() - 1;
      const s = u * u + v * v;
      if (s > 0 && s < 1) return u * Math.sqrt((-2 * Math.log(s)) / s);
    }
  }

  /** Whole number of cents around `median`, skewed to the right as amounts are. */
  amountMinor(median: number, spread: number): number {
    return Math.max(50, Math.round(median * Math.exp(spread * this.normal())));
  }
}
