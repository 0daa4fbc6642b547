import { rolesMay } from "../auth/access";
import type { Role } from "../auth/codes";
import { conflict, forbidden, type KnownError, ruleBroken } from "../errors";
import { type CaseState, LEASE_MINUTES } from "./codes";

/** What the rules need to know of a case. */
export type CaseStanding = {
  state: CaseState;
  assignedTo: string | null;
  claimedBy: string | null;
  claimExpiresAt: Date | null;
  waitUntil: Date | null;
  /** Set while the case is a supervisor's, also while one of them holds it. */
  escalatedAt: Date | null;
};

export type CaseChange = Partial<CaseStanding & { claimedAt: Date | null }>;

export type Asker = { personId: string; roles: readonly Role[] };

/** Cases one person may hold at once: the one in hand, the next one, and a few that were set down for a moment. */
export const MOST_CLAIMS = 5;
const LONGEST_WAIT_DAYS = 30;

export const leaseEnd = (now: Date): Date => new Date(now.getTime() + LEASE_MINUTES * 60_000);

const isSupervisor = (asker: Asker) => asker.roles.includes("supervisor");

const UNHELD = { claimedBy: null, claimedAt: null, claimExpiresAt: null } as const;

/** Whose claim stands; a claim whose lease has run out is nobody's, swept or not. */
export function holderOf(row: CaseStanding, now: Date): string | null {
  if (row.state !== "claimed" || !row.claimExpiresAt) return null;
  return row.claimExpiresAt.getTime() > now.getTime() ? row.claimedBy : null;
}

/** Where a case goes that nobody holds any more: to everybody, or back to the supervisors. */
export const unheldState = (escalatedAt: Date | null): CaseState => (escalatedAt ? "escalated" : "open");

/** Why a case in this state takes no further act; null while it still waits for a verdict. */
function closed(row: CaseStanding): KnownError | null {
  if (row.state === "decided") return conflict("Somebody has decided this case already");
  if (row.state === "lapsed") return conflict("This case has lapsed");
  return null;
}

/** Whether a case is this person's to take once nobody holds it. */
function isFor(row: Pick<CaseStanding, "assignedTo" | "escalatedAt">, asker: Asker): boolean {
  if (row.escalatedAt && !isSupervisor(asker)) return false;
  return row.assignedTo === null || row.assignedTo === asker.personId;
}

/** Whether `next` may hand the case to this person now. */
export function isTakeable(row: CaseStanding, asker: Asker, now: Date): boolean {
  const free = row.state === "open" || row.state === "escalated" || row.state === "claimed";
  return free && holderOf(row, now) === null && isFor(row, asker);
}

/** Whether taking this case would be a free choice from the list, which a policy can forbid to reviewers. */
export function isPick(row: CaseStanding, asker: Asker): boolean {
  return !isSupervisor(asker) && row.assignedTo !== asker.personId && row.claimedBy !== asker.personId;
}

/** @throws KnownError conflict, forbidden */
export function claim(row: CaseStanding, asker: Asker, now: Date): CaseChange {
  const refusal = closed(row);
  if (refusal) throw refusal;
  const holder = holderOf(row, now);
  if (holder !== null && holder !== asker.personId) throw conflict("Somebody else holds this case");
  if (!isFor(row, asker) && !isSupervisor(asker)) {
    throw forbidden(
      row.escalatedAt
        ? "This case was escalated; a supervisor decides it"
        : "This case is assigned to somebody else",
    );
  }
  return {
    state: "claimed",
    claimedBy: asker.personId,
    claimedAt: now,
    claimExpiresAt: leaseEnd(now),
    waitUntil: null,
  };
}

/** Its holder gives a claim back, or a supervisor takes it from them. @throws KnownError conflict */
export function release(row: CaseStanding, asker: Asker): CaseChange {
  const refusal = closed(row);
  if (refusal) throw refusal;
  if (row.state !== "claimed") throw conflict("Nobody holds this case");
  if (row.claimedBy !== asker.personId && !isSupervisor(asker))
    throw conflict("Somebody else holds this case");
  return { state: unheldState(row.escalatedAt), ...UNHELD };
}

/** @throws KnownError conflict unless the asker holds the case */
export function escalate(row: CaseStanding, asker: Asker, now: Date): CaseChange {
  refuseUnlessHeld(row, asker, now);
  return { state: "escalated", escalatedAt: now, assignedTo: null, ...UNHELD };
}

/** The case comes back to the person who set it aside, unless it was assigned to another. @throws KnownError */
export function setWaiting(
  row: CaseStanding,
  asker: Asker,
  until: Date,
  holdExpiresAt: Date | null,
  now: Date,
): CaseChange {
  refuseUnlessHeld(row, asker, now);
  const untilMs = until.getTime();
  if (untilMs <= now.getTime()) throw ruleBroken("needs to lie in the future", "until");
  if (untilMs > now.getTime() + LONGEST_WAIT_DAYS * 86_400_000) {
    throw ruleBroken(`may lie at most ${LONGEST_WAIT_DAYS} days ahead`, "until");
  }
  if (holdExpiresAt && untilMs >= holdExpiresAt.getTime()) {
    throw ruleBroken(`needs to lie before the hold ends at ${holdExpiresAt.toISOString()}`, "until");
  }
  return { state: "waiting", waitUntil: until, assignedTo: row.assignedTo ?? asker.personId, ...UNHELD };
}

/**
 * Assigns to a person or to nobody. A claim of anybody else ends; a reviewer who is given an escalated case gets it
 * back from the supervisors. @throws KnownError conflict
 */
export function assign(row: CaseStanding, to: Asker | null, now: Date): CaseChange {
  const refusal = closed(row);
  if (refusal) throw refusal;
  const assignedTo = to?.personId ?? null;
  const escalatedAt = to && !isSupervisor(to) ? null : row.escalatedAt;
  if (row.state === "waiting") return { assignedTo, escalatedAt };
  const holder = holderOf(row, now);
  if (holder !== null && holder === assignedTo) return { assignedTo, escalatedAt };
  return { assignedTo, escalatedAt, state: unheldState(escalatedAt), ...UNHELD };
}

/** Whether a case may go on being this person's: nobody keeps what they have lost the right to decide. */
export function staysWith(row: Pick<CaseStanding, "escalatedAt">, person: Asker): boolean {
  return rolesMay(person.roles, "desk.work") && (row.escalatedAt === null || isSupervisor(person));
}

/** Takes a case from somebody who may no longer decide it; null where nothing is theirs or it may stay. */
export function freeFrom(row: CaseStanding, person: Asker): CaseChange | null {
  if (closed(row) || staysWith(row, person)) return null;
  const isHeld = row.claimedBy === person.personId;
  if (!isHeld && row.assignedTo !== person.personId) return null;
  return {
    assignedTo: row.assignedTo === person.personId ? null : row.assignedTo,
    ...(isHeld ? { state: unheldState(row.escalatedAt), ...UNHELD } : {}),
  };
}

/** What the clock does to a case; null when nothing is due. */
export function whatTimeBrings(row: CaseStanding, now: Date): CaseChange | null {
  if (row.state === "claimed" && holderOf(row, now) === null) {
    return { state: unheldState(row.escalatedAt), ...UNHELD };
  }
  if (row.state === "waiting" && row.waitUntil && row.waitUntil.getTime() <= now.getTime()) {
    return { state: unheldState(row.escalatedAt), waitUntil: null };
  }
  return null;
}

function refuseUnlessHeld(row: CaseStanding, asker: Asker, now: Date): void {
  const refusal = closed(row);
  if (refusal) throw refusal;
  const holder = holderOf(row, now);
  if (holder === asker.personId) return;
  throw conflict(holder === null ? "Claim the case first" : "Somebody else holds this case");
}
