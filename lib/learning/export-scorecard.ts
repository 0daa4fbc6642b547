import "server-only";
import { desc, eq } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { scores } from "@/db/schema/transactions";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { fitVector } from "../signals/read-signal-set";
import type { SignalSet } from "../signals/signal-set";
import { readScorerInUse } from "./held-scorer";
import type { ScorecardView } from "./scorecard-schema";
import { scorecardView } from "./scorecard-view";

/** The scorer in use, frozen, with the newest payment's vector as the example. */
export async function exportScorecard(ctx: Context): Promise<ScorecardView> {
  demand(ctx, "scorer.read");
  const { name, version, scorer, signals } = await readScorerInUse(ctx.db);
  const { method } = scorer;
  const example = await newestVector(ctx.db, signals);
  return scorecardView({ name, version, method, signals }, scorer.scorecard(), example, ctx.now());
}

async function newestVector(db: Executor, signals: SignalSet): Promise<Float64Array | null> {
  const [newest] = await db
    .select({ transactionId: scores.transactionId, vector: scores.vector })
    .from(scores)
    .where(eq(scores.kind, "arrival"))
    .orderBy(desc(scores.id))
    .limit(1);
  return newest ? fitVector(db, signals, newest.transactionId, newest.vector) : null;
}
