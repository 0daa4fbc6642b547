import "server-only";
import { and, asc, gte, inArray, lte, max } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { labelLog, scorers } from "@/db/schema/scorers";
import type { Scorer } from "../scorer";
import { signalSetOfScorer } from "../signals/read-signal-set";
import { foldLog, foldStart } from "./fold";

/**
 * The scorer exactly as it was at a version, derived from the label log as the log stood then.
 * @throws Error when no scorer ever had that version
 */
export async function scorerAsOf(db: Executor, version: number): Promise<Scorer> {
  const [row] = await db
    .select({ id: scorers.id, options: scorers.options, signalSetVersion: scorers.signalSetVersion })
    .from(scorers)
    .where(and(inArray(scorers.role, ["in_use", "retired"]), gte(scorers.version, version)))
    .orderBy(asc(scorers.version))
    .limit(1);
  if (!row) throw new Error(`No scorer had version ${version}`);
  const [log] = await db
    .select({ seq: max(labelLog.seq) })
    .from(labelLog)
    .where(lte(labelLog.scorerVersion, version));
  const asOfSeq = log?.seq ?? 0;
  const of = { ...row, signals: await signalSetOfScorer(db, row) };
  const from = await foldStart(db, of, asOfSeq + 1, asOfSeq);
  return (await foldLog(db, from, asOfSeq)).scorer;
}
