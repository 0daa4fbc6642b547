import { natsToDecibans, probabilityOf } from "../decibans";
import type { FieldError } from "../errors";
import type { Action } from "./codes";
import type { TransactionResult } from "./schema";

export type Accepted = {
  externalId: string;
  transactionId: string;
  action: Action;
  /** Log-odds of fraud in nats, as scored at arrival. */
  logit: number;
  holdExpiresAt: Date | null;
  caseId: string | null;
  policyVersion: number;
  scorerVersion: number;
};

/** Rounded, so that a repeat of the item is answered with the very same figures after a trip through the database. */
export function acceptedResult(status: "created" | "duplicate", accepted: Accepted): TransactionResult {
  const { logit, holdExpiresAt, ...same } = accepted;
  return {
    ...same,
    status,
    probability: rounded(probabilityOf(logit), 6),
    evidenceDecibans: rounded(natsToDecibans(logit), 2),
    holdExpiresAt: holdExpiresAt?.toISOString() ?? null,
    errors: [],
  };
}

export function rejectedResult(externalId: string | null, errors: readonly FieldError[]): TransactionResult {
  return {
    externalId,
    status: "rejected",
    transactionId: null,
    action: null,
    probability: null,
    evidenceDecibans: null,
    holdExpiresAt: null,
    caseId: null,
    policyVersion: null,
    scorerVersion: null,
    errors: [...errors],
  };
}

/** Other content under an identifier that has come in before. */
export function otherContentResult(externalId: string): TransactionResult {
  return rejectedResult(externalId, [
    { path: "externalId", message: "has come in before with other content; nothing was changed" },
  ]);
}

function rounded(value: number, places: number): number {
  const factor = 10 ** places;
  return Math.round(value * factor) / factor;
}
