import "server-only";
import { asc, inArray } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { changeCase, type LockedCase } from "../cases/locked-case";
import type { CaseChange } from "../cases/rules";
import { conflict, type FieldError, KnownError, notFound } from "../errors";

/** Locks the cases in the order of their ids, as every other writer of several cases does. */
function lockCases(tx: Tx, caseIds: readonly string[]): Promise<LockedCase[]> {
  return tx
    .select()
    .from(cases)
    .where(inArray(cases.id, [...caseIds]))
    .orderBy(asc(cases.id))
    .for("update");
}

export type ChangedCase = { before: LockedCase; after: LockedCase };

/**
 * Applies a rule to every case, or to none: the answer then says of each case that refused why it did.
 * A case that stands so already is left alone, so that a verdict on its way still fits its revision.
 * @throws KnownError conflict with one line per case, by its place in `caseIds`
 */
export async function changeAll(
  tx: Tx,
  caseIds: readonly string[],
  rule: (row: LockedCase) => CaseChange,
  now: Date,
): Promise<ChangedCase[]> {
  const rows = new Map((await lockCases(tx, caseIds)).map((row) => [row.id, row]));
  const errors: FieldError[] = [];
  const changes: { row: LockedCase; change: CaseChange }[] = [];
  caseIds.forEach((id, index) => {
    try {
      const row = rows.get(id);
      if (!row) throw notFound("The case");
      changes.push({ row, change: rule(row) });
    } catch (error) {
      if (!(error instanceof KnownError)) throw error;
      errors.push({ path: `caseIds.${index}`, message: error.message });
    }
  });
  if (errors.length > 0) throw refused(errors, caseIds.length);
  const changed: ChangedCase[] = [];
  for (const { row, change } of changes) {
    if (standsSoAlready(row, change)) continue;
    changed.push({ before: row, after: await changeCase(tx, row, change, now) });
  }
  return changed;
}

function refused(errors: readonly FieldError[], asked: number): KnownError {
  const { code, message } = conflict(`Nothing was changed: ${errors.length} of ${asked} cases refused`);
  return new KnownError(code, message, { errors });
}

function standsSoAlready(row: LockedCase, change: CaseChange): boolean {
  return Object.entries(change).every(([key, value]) => {
    const present = row[key as keyof CaseChange];
    return present instanceof Date && value instanceof Date
      ? present.getTime() === value.getTime()
      : present === value;
  });
}
