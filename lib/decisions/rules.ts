import type { Role } from "../auth/codes";
import type { CaseState } from "../cases/codes";
import type { LabelKind, Verdict } from "./codes";

export type DecidableCase = {
  state: CaseState;
  revision: number;
  assignedTo: string | null;
  claimedBy: string | null;
  claimExpiresAt: Date | null;
};

/** Why this person may not decide this case now; null when they may. */
export function refusalToDecide(
  row: DecidableCase,
  person: { personId: string; roles: readonly Role[] },
  now: Date,
): string | null {
  if (row.state === "decided") return "Somebody has decided this case already";
  if (row.state === "lapsed") return "This case has lapsed";
  const heldByOther = row.claimedBy !== null && row.claimedBy !== person.personId;
  if (heldByOther && (row.claimExpiresAt?.getTime() ?? 0) > now.getTime())
    return "Somebody else holds this case";
  if (person.roles.includes("supervisor")) return null;
  if (row.state === "escalated") return "This case was escalated; a supervisor decides it";
  if (row.assignedTo !== null && row.assignedTo !== person.personId)
    return "This case is assigned to somebody else";
  return null;
}

/** The label a verdict gives; a customer's own misuse is no fraud and teaches the scorer nothing. */
export function labelOf(verdict: Verdict): 1 | -1 | null {
  switch (verdict) {
    case "fraudulent":
      return 1;
    case "legitimate":
      return -1;
    case "customer_misuse":
      return null;
  }
}

/**
 * Whether a reviewer's finding takes the place of a label that stands. "Cleared" is the weakest of all: it labels
 * what nobody looks at, and whoever does look knows better. Reports of fraud and settled findings are stronger.
 */
export function overrules(
  label: 1 | -1 | null,
  inForce: { kind: LabelKind; label: 1 | -1 } | undefined,
): boolean {
  return inForce?.kind === "outcome" && inForce.label === -1 && label !== -1;
}

const LONGEST_HANDLING_SECONDS = 4 * 60 * 60;

/** Time the case was in hand, for its review cost; a case decided without a claim cost none that is known. */
export function handlingSeconds(claimedAt: Date | null, now: Date): number {
  if (!claimedAt) return 0;
  const seconds = Math.round((now.getTime() - claimedAt.getTime()) / 1000);
  return Math.min(Math.max(seconds, 0), LONGEST_HANDLING_SECONDS);
}

/**
 * Until when the decision can be taken back: the policy's grace period, and where a hold expires sooner, a minute
 * before it, so that the payment is not released or refused under an undo.
 */
export function undoUntil(decidedAt: Date, undoMinutes: number, holdExpiresAt: Date | null): Date {
  const byPolicy = decidedAt.getTime() + undoMinutes * 60_000;
  const byHold = holdExpiresAt ? holdExpiresAt.getTime() - 60_000 : Number.POSITIVE_INFINITY;
  return new Date(Math.max(decidedAt.getTime(), Math.min(byPolicy, byHold)));
}
