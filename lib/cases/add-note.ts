import "server-only";
import { and, eq } from "drizzle-orm";
import type { Tx } from "@/db/client";
import { caseNotes, noteDrafts } from "@/db/schema/cases";
import { newId } from "../new-id";

/** Writes a note inside the caller's transaction; what its author had half-written is done with. */
export async function addNote(
  tx: Tx,
  note: { caseId: string; personId: string; body: string; now: Date },
): Promise<string> {
  const id = newId();
  const { caseId, personId, body, now } = note;
  await tx.insert(caseNotes).values({ id, caseId, personId, body, writtenAt: now });
  await tx.delete(noteDrafts).where(and(eq(noteDrafts.caseId, caseId), eq(noteDrafts.personId, personId)));
  return id;
}
