import "server-only";
import { and, asc, gte, inArray } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { scorers } from "@/db/schema/scorers";
import { signalSetOfScorer } from "../signals/read-signal-set";
import type { SignalSet } from "../signals/signal-set";

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

/** The scorer that had the version. @throws Error when none ever did */
export async function stageOrThrow(
  db: Executor,
  version: number,
): Promise<ScorerStage & { signalSetVersion: number }> {
  const [row] = await db
    .select({
      id: scorers.id,
      name: scorers.name,
      lastVersion: scorers.version,
      signalSetVersion: scorers.signalSetVersion,
    })
    .from(scorers)
    .where(and(inArray(scorers.role, ["in_use", "retired"]), gte(scorers.version, version)))
    .orderBy(asc(scorers.version))
    .limit(1);
  if (!row) throw new Error(`No scorer had version ${version}`);
  return row;
}

/** The signals that the scorer in use read when it had the version. @throws Error when none ever had it */
export async function signalSetOfVersion(db: Executor, version: number): Promise<SignalSet> {
  return signalSetOfScorer(db, await stageOrThrow(db, version));
}

/** The scorer that had the version; null where none ever did. */
export function stageOf(lineage: readonly ScorerStage[], version: number): ScorerStage | null {
  return lineage.find(({ lastVersion }) => lastVersion >= version) ?? null;
}
