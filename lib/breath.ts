import "server-only";

const LONGEST_HOLD_MS = 8;

/** Lets the rest of the process have its turn now and then during a long loop. */
export class Breath {
  private since = performance.now();

  async take(): Promise<void> {
    if (performance.now() - this.since < LONGEST_HOLD_MS) return;
    await new Promise((resolve) => setImmediate(resolve));
    this.since = performance.now();
  }
}
