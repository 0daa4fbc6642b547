/** The positions with the largest keys of those offered, at most `limit`; of equal keys those offered first. */
export class Best {
  private readonly chosen: number[] = [];

  constructor(
    private readonly keys: Float64Array,
    private readonly limit: number,
  ) {}

  offer(position: number): void {
    const { chosen, keys, limit } = this;
    const key = keys[position] as number;
    if (chosen.length >= limit) {
      const last = chosen[limit - 1];
      if (last === undefined || key <= (keys[last] as number)) return;
      chosen.pop();
    }
    let at = chosen.length;
    while (at > 0 && (keys[chosen[at - 1] as number] as number) < key) at -= 1;
    chosen.splice(at, 0, position);
  }

  /** Largest key first. */
  take(): readonly number[] {
    return this.chosen;
  }
}
