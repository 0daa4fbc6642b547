import "server-only";
import "server-only";
/** Runs tasks one after another in the order they were asked for; one that fails does not stop those behind it. */
export class Turns {
  private last: Promise<unknown> = Promise.resolve();

  take<T>(task: () => T | Promise<T>): Promise<T> {
    const mine = this.last.then(task);
    this.last = mine.catch(() => undefined);
    return mine;
  }
}

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
