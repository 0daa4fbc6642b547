import { and, eq, isNull } from "drizzle-orm";
import type { Database } from "@/db/client";
import { caseNotes, cases, decisions, noteDrafts } from "@/db/schema/cases";

/** The decision that stands on a case, as the database has it; null while there is none. */
export async function findDecision(db: Database, caseId: string) {
  const [decision] = await db
    .select()
    .from(decisions)
    .where(and(eq(decisions.caseId, caseId), isNull(decisions.undoneAt), isNull(decisions.supersededAt)));
  return decision ?? null;
}

export async function readCaseRow(db: Database, caseId: string) {
  const [row] = await db.select().from(cases).where(eq(cases.id, caseId));
  if (!row) throw new Error(`There is no case ${caseId}`);
  return row;
}

export async function readNotes(db: Database, caseId: string): Promise<string[]> {
  const notes = await db.select().from(caseNotes).where(eq(caseNotes.caseId, caseId));
  return notes.map(({ body }) => body);
}

export async function readDraft(db: Database, caseId: string): Promise<string | null> {
  const [draft] = await db.select().from(noteDrafts).where(eq(noteDrafts.caseId, caseId));
  return draft?.body ?? null;
}

/** How many cases a person has in hand and at the elbow. */
export function countHeld(db: Database, personId: string): Promise<number> {
  return db.$count(cases, eq(cases.claimedBy, personId));
}
