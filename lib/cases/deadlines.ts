import type { Zone } from "../policy/codes";
import type { PolicyTerms } from "../policy/schema";
import type { CASE_KINDS } from "./codes";

type Arrival = {
  kind: (typeof CASE_KINDS)[number];
  zone: Zone;
  /** Deadlines run from when the payment came in here, not from when it was made. */
  receivedAt: Date;
  /** When a held payment is released or refused by itself; null when nothing is held. */
  holdExpiresAt: Date | null;
};

/** A verdict is wanted this long before a hold ends, or half-way through a shorter one. */
const BEFORE_HOLD_ENDS_MS = 5 * 60_000;

export function deadlinesOf(arrival: Arrival, terms: PolicyTerms): { dueAt: Date; lapsesAt: Date } {
  const { deadlineMinutes, lifetimeDays } = terms;
  const receivedMs = arrival.receivedAt.getTime();
  const minutes =
    arrival.kind === "sample"
      ? deadlineMinutes.sample
      : arrival.zone === "hold"
        ? deadlineMinutes.hold
        : deadlineMinutes.review;
  const dueMs = receivedMs + minutes * 60_000;
  return {
    dueAt: new Date(
      arrival.holdExpiresAt ? Math.min(dueMs, beforeHoldEnds(receivedMs, arrival.holdExpiresAt)) : dueMs,
    ),
    lapsesAt: new Date(receivedMs + lifetimeDays * 86_400_000),
  };
}

function beforeHoldEnds(receivedMs: number, holdExpiresAt: Date): number {
  const endMs = holdExpiresAt.getTime();
  return endMs - Math.min(BEFORE_HOLD_ENDS_MS, Math.max(0, endMs - receivedMs) / 2);
}
