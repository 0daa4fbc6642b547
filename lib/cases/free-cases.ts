import "server-only";
import { and, asc, eq, inArray, isNotNull, or } from "drizzle-orm";
import type { Executor, Tx } from "@/db/client";
import { cases } from "@/db/schema/cases";
import type { TrailEntry } from "../trail/append";
import { UNDECIDED_STATES } from "./codes";
import { changeCase, type LockedCase } from "./locked-case";
import { type Asker, freeFrom, staysWith } from "./rules";

/**
 * Locks the undecided cases that cannot stay with a person of these roles; of somebody deactivated, who has none, all.
 * Call it before the transaction takes any other lock.
 */
export async function lockCasesNotFor(tx: Tx, person: Asker): Promise<LockedCase[]> {
  const ids = await findCasesNotFor(tx, person);
  if (ids.length === 0) return [];
  // Found first and locked by id: rows would be locked in the order in which an index has them.
  return tx.select().from(cases).where(inArray(cases.id, ids)).orderBy(asc(cases.id)).for("update");
}

/**
 * Gives the locked cases back to everybody, or to the supervisors; those set aside stay so until their time comes.
 * @returns entries for the end of the caller's transaction; call `casesChanged` with their cases after its commit
 */
export async function freeCases(
  tx: Tx,
  rows: readonly LockedCase[],
  person: Asker,
  now: Date,
): Promise<(TrailEntry & { caseId: string })[]> {
  const entries: (TrailEntry & { caseId: string })[] = [];
  for (const row of rows) {
    // Decided or given to somebody else before the lock was had.
    const change = freeFrom(row, person);
    if (!change) continue;
    const freed = await changeCase(tx, row, change, now);
    entries.push({
      act: "case.freed",
      subjectKind: "case",
      subjectId: row.id,
      caseId: row.id,
      facts: {
        revision: freed.revision,
        assignedFrom: freed.assignedTo === row.assignedTo ? null : row.assignedTo,
        claimEndedOf: freed.claimedBy === row.claimedBy ? null : row.claimedBy,
      },
    });
  }
  return entries;
}

/** Ids of undecided cases that are a person's and cannot stay so. */
export async function findCasesNotFor(db: Executor, person: Asker): Promise<string[]> {
  const { personId } = person;
  const rows = await db
    .select({ id: cases.id, escalatedAt: cases.escalatedAt })
    .from(cases)
    .where(
      and(
        inArray(cases.state, [...UNDECIDED_STATES]),
        or(eq(cases.assignedTo, personId), eq(cases.claimedBy, personId)),
      ),
    );
  return rows.flatMap((row) => (staysWith(row, person) ? [] : row.id));
}

/** Everybody who has an undecided case to their name. */
export async function findPeopleWithCases(db: Executor): Promise<string[]> {
  const ids = new Set<string>();
  for (const column of [cases.assignedTo, cases.claimedBy]) {
    const rows = await db
      .selectDistinct({ personId: column })
      .from(cases)
      .where(and(inArray(cases.state, [...UNDECIDED_STATES]), isNotNull(column)));
    for (const { personId } of rows) if (personId) ids.add(personId);
  }
  return [...ids];
}
