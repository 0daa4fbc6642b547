import "server-only";
import { eq } from "drizzle-orm";
import type { Database, Executor } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import type { decisions } from "@/db/schema/cases";
import { scores, transactions } from "@/db/schema/transactions";
import { evidenceOf, unpackEvidence } from "../learning/evidence";
import { readScorerForScoring } from "../learning/held-scorer";
import { stageOrThrow } from "../learning/lineage";
import { type PolicyInForce, policyInForce } from "../policy/read";
import { thresholdsInForce } from "../policy/thresholds";
import { FORMULA_COLUMNS, signalSetOfScorer } from "../signals/read-signal-set";
import { extendSignals, type SignalSet } from "../signals/signal-set";
import { spansOf, whatWouldChange } from "../signals/what-would-change";
import { evidenceView } from "./evidence-view";
import type { EvidenceView } from "./schema";

type DecisionRow = Pick<
  typeof decisions.$inferSelect,
  "evidence" | "scoreId" | "scorerVersionBefore" | "policyVersion" | "decidedAt"
>;

/** How the evidence stands now. */
export async function readEvidenceNow(
  db: Database,
  scoreId: number,
  policy: PolicyInForce,
  now: Date,
): Promise<EvidenceView> {
  const { name, scorer, version, signals } = await readScorerForScoring(db);
  const score = await readScoreOrThrow(db, scoreId, signals);
  return evidenceView(
    {
      ...score,
      evidence: evidenceOf(scorer, score.vector),
      without: whatWouldChange(scorer, score.vector, spansOf(signals)),
    },
    await thresholdsInForce(db, policy, now),
    { scorerName: name, scorerVersion: version, policyVersion: policy.version },
  );
}

/** The evidence that was before the person who decided, with the lines as they lay then. */
export async function readEvidenceShown(db: Executor, decision: DecisionRow): Promise<EvidenceView> {
  const stage = await stageOrThrow(db, decision.scorerVersionBefore);
  const signals = await signalSetOfScorer(db, stage);
  const score = await readScoreOrThrow(db, decision.scoreId, signals);
  const policy = await policyInForce(db, decision.decidedAt);
  return evidenceView(
    { ...score, evidence: unpackEvidence(bytesToVector(decision.evidence)), without: null },
    await thresholdsInForce(db, policy, decision.decidedAt),
    {
      scorerName: stage.name,
      scorerVersion: decision.scorerVersionBefore,
      policyVersion: decision.policyVersion,
    },
  );
}

/** Vector and marks as the set has them: a case may wait with the score of an earlier one. */
async function readScoreOrThrow(db: Executor, scoreId: number, signals: SignalSet) {
  const [row] = await db
    .select({ vector: scores.vector, missing: scores.missing, payment: FORMULA_COLUMNS })
    .from(scores)
    .innerJoin(transactions, eq(transactions.id, scores.transactionId))
    .where(eq(scores.id, scoreId));
  if (!row) throw new Error(`Score ${scoreId} is not there`);
  const scored = { vector: bytesToVector(row.vector), missing: new Uint8Array(row.missing) };
  return { signals, ...extendSignals(signals, scored, row.payment) };
}
