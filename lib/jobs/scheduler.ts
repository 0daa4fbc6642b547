import "server-only";
import type { Job } from "../job";
import { log } from "../log";
import { type JobEnvironment, runJob } from "./run-job";

export type Scheduler = {
  /** Starts no further job and waits for those that run. */
  stop: () => Promise<void>;
};

/** Runs each job at its own interval, never beside itself, until stopped. */
export function startScheduler(environment: JobEnvironment, jobs: readonly Job[]): Scheduler {
  const controller = new AbortController();
  const timers = new Map<string, NodeJS.Timeout>();
  const running = new Set<Promise<void>>();

  function plan(job: Job, waitMs: number): void {
    if (controller.signal.aborted) return;
    timers.set(
      job.name,
      setTimeout(() => {
        const turn = runOnce(job).finally(() => running.delete(turn));
        running.add(turn);
      }, waitMs),
    );
  }

  async function runOnce(job: Job): Promise<void> {
    try {
      await runJob(environment, job, controller.signal);
    } catch (error) {
      // The slot could not even be claimed or closed: the database is away. The next turn tries again.
      log.error({ job: job.name, err: error }, "A job could not run");
    }
    plan(job, job.everyMs);
  }

  const names = new Set(jobs.map((job) => job.name));
  if (names.size !== jobs.length) throw new Error("Two jobs have the same name");
  for (const job of jobs) plan(job, 0);

  return {
    stop: async () => {
      controller.abort();
      for (const timer of timers.values()) clearTimeout(timer);
      await Promise.all(running);
    },
  };
}
