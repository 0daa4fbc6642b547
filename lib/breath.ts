import "server-only";

const LONGEST_HOLD_MS = 4;

/** Lets the rest of the process have its turn now and then during a long loop. */
export class Breath {
  private since = performance.now();

  async take(): Promise<void> {
    if (performance.now() - this.since < LONGEST_HOLD_MS) return;
    await new Promise((resolve) => setImmediate(resolve));
    this.since = performance.now();
  }
}

/** Drives a computation that pauses every few milliseconds, so that others have their turn at its pauses. */
export async function inBreaths<T>(steps: Generator<void, T>): Promise<T> {
  const breath = new Breath();
  for (;;) {
    const step = steps.next();
    if (step.done) return step.value;
    await breath.take();
  }
}
