import "server-only";
import type { Tx } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { newId } from "../new-id";
import type { Zone } from "../policy/codes";
import type { PolicyInForce } from "../policy/read";
import type { CASE_KINDS } from "./codes";
import { deadlinesOf } from "./deadlines";

export type CaseToOpen = {
  transactionId: string;
  kind: (typeof CASE_KINDS)[number];
  zone: Zone;
  scoreId: number;
  /** Known probability with which a sample was drawn; null for other kinds. */
  sampleProbability: number | null;
  /** Null where nothing is held. */
  holdExpiresAt: Date | null;
  /** When the payment came in; deadlines run from there. Default `now`. */
  receivedAt?: Date;
};

const ROWS_IN_STATEMENT = 1_000;

/**
 * Opens cases inside the caller's transaction, which writes one trail entry for all of them; call `casesChanged`
 * with the ids after its commit. Numbers are given in the order of the rows.
 * @returns the ids in the order of the rows
 */
export async function openCases(
  tx: Tx,
  rows: readonly CaseToOpen[],
  policy: Pick<PolicyInForce, "version" | "terms">,
  now: Date,
): Promise<string[]> {
  const values = rows.map(({ receivedAt = now, holdExpiresAt, ...row }) => ({
    ...row,
    ...deadlinesOf({ kind: row.kind, zone: row.zone, receivedAt, holdExpiresAt }, policy.terms),
    id: newId(),
    state: "open" as const,
    policyVersion: policy.version,
    openedAt: now,
    changedAt: now,
  }));
  for (let from = 0; from < values.length; from += ROWS_IN_STATEMENT) {
    await tx.insert(cases).values(values.slice(from, from + ROWS_IN_STATEMENT));
  }
  return values.map(({ id }) => id);
}
