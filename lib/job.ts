import type { Context } from "./context";

/** Work that the server does by itself, again and again. */
export type Job = {
  name: string;
  /** How often a server looks whether there is something to do. */
  everyMs: number;
  /**
   * The time slot the work belongs to: the first server to claim it does it, the others do not. Null where row locks
   * share the work out already.
   */
  slot: ((now: Date) => string) | null;
  /** Stops early, between two units of its work, when the signal is given. */
  run: (ctx: Context, signal: AbortSignal) => Promise<void>;
};

/** One slot for every so many minutes of the clock, named by its beginning. */
export const slotOfMinutes =
  (minutes: number) =>
  (now: Date): string => {
    const lengthMs = minutes * 60_000;
    return new Date(Math.floor(now.getTime() / lengthMs) * lengthMs).toISOString();
  };
