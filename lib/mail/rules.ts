import type { Capability } from "../auth/access";
import type { MAIL_KINDS, MAIL_STATES } from "./codes";

export type MailState = (typeof MAIL_STATES)[number];

/** What a person must still be allowed to do when a message of the kind goes out to them. */
export const CAPABILITY_TO_READ: Readonly<Record<(typeof MAIL_KINDS)[number], Capability>> = {
  weekly_summary: "losses.read",
  case_assigned: "desk.work",
  approval_wanted: "policy.approve",
  deadline_digest: "desk.work",
};

/** What came of handing a message to the mail server. */
export type Attempt =
  | { result: "accepted" }
  /** The server, or the way to it, said no before it had taken the message. */
  | { result: "refused"; permanent: boolean; problem: string }
  /** The message was being handed over when the answer was lost: it may have gone out. */
  | { result: "unknown"; problem: string };

/** Longer than any one send can take, so that a sender that lives has always reported before. */
export const SENDING_LEASE_MS = 5 * 60_000;

const FIRST_WAIT_MS = 15_000;
const LONGEST_WAIT_MS = 60 * 60_000;
/** About two days of trying: 8 waits up to the hour, then one an hour. */
const MOST_ATTEMPTS = 56;

/** Wait before the next attempt: doubled after each one, up to an hour. */
function retryWaitMs(attempts: number): number {
  return Math.min(FIRST_WAIT_MS * 2 ** (attempts - 1), LONGEST_WAIT_MS);
}

/** What stands for an attempt where the message must not be handed to the mail server at all. */
export const NOT_THEIRS_TO_READ: Attempt = {
  result: "refused",
  permanent: true,
  problem: "The recipient may no longer read this",
};

export type AfterAttempt = {
  state: MailState;
  nextAttemptAt: Date;
  sentAt: Date | null;
  problem: string | null;
};

/** Where a message stands after an attempt; one that may have gone out is never tried again by itself. */
export function afterAttempt(attempt: Attempt, attempts: number, now: Date): AfterAttempt {
  switch (attempt.result) {
    case "accepted":
      return { state: "sent", nextAttemptAt: now, sentAt: now, problem: null };
    case "unknown":
      return { state: "uncertain", nextAttemptAt: now, sentAt: null, problem: attempt.problem };
    case "refused": {
      const over = attempt.permanent || attempts >= MOST_ATTEMPTS;
      return {
        state: over ? "failed" : "queued",
        nextAttemptAt: over ? now : new Date(now.getTime() + retryWaitMs(attempts)),
        sentAt: null,
        problem: attempt.problem,
      };
    }
  }
}

/** Subjects show on locked screens and in logs of mail servers: one line, no long run of digits, no address. */
export function refusalOfSubject(subject: string): string | null {
  if (/[\r\n]/.test(subject)) return "A subject is one line";
  if (/(?:\d[ -]?){9,}/.test(subject)) return "A subject holds no long number";
  if (subject.includes("@")) return "A subject holds no address";
  return null;
}
