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
