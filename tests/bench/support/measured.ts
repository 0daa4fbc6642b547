import { monitorEventLoopDelay, performance } from "node:perf_hooks";

/** How long the work takes, and the longest time it held up everybody else in this process, in milliseconds. */
export async function measured(work: () => Promise<unknown>): Promise<{ ms: number; longestHoldMs: number }> {
  const delay = monitorEventLoopDelay({ resolution: 1 });
  delay.enable();
  const started = performance.now();
  await work();
  const took = performance.now() - started;
  // One more turn, so that a hold at the very end is seen too.
  await new Promise((resolve) => setTimeout(resolve, 5));
  delay.disable();
  return { ms: took, longestHoldMs: delay.max / 1e6 };
}
