const ERRNO = { duplicate: 1062, deadlock: 1213, lockWait: 1205, check: 4025, signal: 1644 } as const;

/** Drizzle wraps the driver's error; the number is on the innermost cause. */
export function databaseErrno(error: unknown): number | null {
  for (let e = error; e instanceof Error; e = e.cause) {
    if ("errno" in e && typeof e.errno === "number") return e.errno;
  }
  return null;
}

export const isDuplicate = (error: unknown) => databaseErrno(error) === ERRNO.duplicate;
export const isRefusedByTrigger = (error: unknown) => databaseErrno(error) === ERRNO.signal;

export function isWorthRetrying(error: unknown): boolean {
  const errno = databaseErrno(error);
  return errno === ERRNO.deadlock || errno === ERRNO.lockWait;
}
