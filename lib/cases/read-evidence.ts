import "server-only";
import { eq } from "drizzle-orm";
import type { Database, Executor } from "@/db/client";
import { bytesToVector } from "@/db/columns";
import type { decisions } from "@/db/schema/cases";
import { scores } from "@/db/schema/transactions";
import { evidenceOf, unpackEvidence } from "../learning/evidence";
import { readScorerForScoring } from "../learning/held-scorer";
import { type PolicyInForce, policyInForce } from "../policy/read";
import { thresholdsInForce } from "../policy/thresholds";
import { CATALOGUE_SPANS, whatWouldChange } from "../signals/what-would-change";
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
  const score = await readScoreOrThrow(db, scoreId);
  const { scorer, version } = await readScorerForScoring(db);
  return evidenceView(
    {
      ...score,
      evidence: evidenceOf(scorer, score.vector),
      without: whatWouldChange(scorer, score.vector, CATALOGUE_SPANS),
    },
    await thresholdsInForce(db, policy, now),
    { scorerVersion: version, policyVersion: policy.version },
  );
}

/** The evidence that was before the person who decided, with the lines as they lay then. */
export async function readEvidenceShown(db: Executor, decision: DecisionRow): Promise<EvidenceView> {
  const score = await readScoreOrThrow(db, decision.scoreId);
  const policy = await policyInForce(db, decision.decidedAt);
  return evidenceView(
    { ...score, evidence: unpackEvidence(bytesToVector(decision.evidence)), without: null },
    await thresholdsInForce(db, policy, decision.decidedAt),
    { scorerVersion: decision.scorerVersionBefore, policyVersion: decision.policyVersion },
  );
}

async function readScoreOrThrow(db: Executor, scoreId: number) {
  const [row] = await db
    .select({ vector: scores.vector, missing: scores.missing, signalSetVersion: scores.signalSetVersion })
    .from(scores)
    .where(eq(scores.id, scoreId));
  if (!row) throw new Error(`Score ${scoreId} is not there`);
  return { ...row, vector: bytesToVector(row.vector), missing: new Uint8Array(row.missing) };
}
