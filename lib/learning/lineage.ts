import "server-only";
import { asc, inArray } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { scorers } from "@/db/schema/scorers";

/** A scorer that is or was in use; versions go on from one to the next. */
export type ScorerStage = { id: string; name: string; lastVersion: number };

/** Scorers in use one after the other, the first one first. */
export async function readLineage(db: Executor): Promise<ScorerStage[]> {
  return db
    .select({ id: scorers.id, name: scorers.name, lastVersion: scorers.version })
    .from(scorers)
    .where(inArray(scorers.role, ["in_use", "retired"]))
    .orderBy(asc(scorers.version));
}

/** The scorer that had the version; null where none ever did. */
export function stageOf(lineage: readonly ScorerStage[], version: number): ScorerStage | null {
  return lineage.find(({ lastVersion }) => lastVersion >= version) ?? null;
}
