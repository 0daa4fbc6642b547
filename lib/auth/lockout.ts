/** PCI DSS 8.3.4: locked after at most ten failures, for at least thirty minutes. */
const FAILURES_TO_LOCK = 10;
const LOCK_MINUTES = 30;

export type Attempts = { failedSignIns: number; lockedUntil: Date | null };

export function isLocked(attempts: Attempts, now: Date): boolean {
  return attempts.lockedUntil !== null && attempts.lockedUntil > now;
}

/**
 * Counts an attempt before its password is looked at, so that attempts at the same moment cannot share one place.
 * A right password clears the count again; a lock that has run out starts it anew.
 */
export function chargeAttempt(attempts: Attempts, now: Date): Attempts {
  const failedSignIns = (attempts.lockedUntil ? 0 : attempts.failedSignIns) + 1;
  const lockedUntil =
    failedSignIns >= FAILURES_TO_LOCK ? new Date(now.getTime() + LOCK_MINUTES * 60_000) : null;
  return { failedSignIns, lockedUntil };
}
