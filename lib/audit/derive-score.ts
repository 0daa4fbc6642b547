import "server-only";
import type { Database } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { inTransaction } from "@/db/tx";
import { demandPerson, mayDo } from "../auth/demand";
import { withoutSignalView } from "../cases/evidence-view";
import type { Context } from "../context";
import { forbidden } from "../errors";
import { scorerAsOf } from "../learning/as-of";
import { evidenceOf, packEvidence } from "../learning/evidence";
import { readLineage, signalSetOfVersion, stageOf } from "../learning/lineage";
import { DimensionError, NotFiniteError, type Scorer } from "../scorer";
import { type SignalSpan, spansOf, whatWouldChange } from "../signals/what-would-change";
import { appendTrail } from "../trail/append";
import { caseScoresOrThrow } from "./case-scores";
import { type KeptScore, keptScoreOrThrow } from "./kept-score";
import type { DerivationInput, DerivationView } from "./schema";

/**
 * Derives a score of the past again from the label log and says whether it comes out bit for bit. Reviewers may for
 * cases they decided; reading by those who read everybody's is itself recorded.
 * @throws KnownError not_found, forbidden
 */
export async function deriveScore(ctx: Context, { id, scoreId }: DerivationInput): Promise<DerivationView> {
  const actor = demandPerson(ctx, "trail.own");
  const { transactionId, hidden, mayDerive } = await caseScoresOrThrow(ctx, id);
  if (!mayDerive) throw forbidden("Reviewers see the record of cases that they decided themselves");
  if (hidden) throw forbidden("The policy hides the score until the verdict is given");
  const kept = await keptScoreOrThrow(ctx.db, transactionId, scoreId);
  const view = await derive(ctx.db, kept);
  if (mayDo(actor, "trail.read")) await recordReading(ctx, id, view);
  return view;
}

async function derive(db: Database, kept: KeptScore): Promise<DerivationView> {
  const stage = stageOf(await readLineage(db), kept.scorerVersion);
  const view = {
    scoreId: kept.scoreId,
    kind: kept.kind,
    at: kept.at.toISOString(),
    scorer: stage && { name: stage.name, version: kept.scorerVersion },
    kept: kept.logit,
  };
  const nothing = { labels: null, derived: null, equal: false, withoutSignals: [] };
  if (!stage) return { ...view, ...nothing, problem: `No scorer ever had version ${kept.scorerVersion}.` };
  const scorer = await scorerAsOf(db, kept.scorerVersion);
  try {
    const spans = spansOf(await signalSetOfVersion(db, kept.scorerVersion));
    return { ...view, ...compare(scorer, kept, spans), labels: scorer.labels, problem: null };
  } catch (error) {
    if (!(error instanceof DimensionError || error instanceof NotFiniteError)) throw error;
    return { ...view, ...nothing, problem: "The signals kept with this score are not those of its scorer." };
  }
}

function compare(
  scorer: Scorer,
  { vector, logit, leverage, evidence }: KeptScore,
  spans: readonly SignalSpan[],
) {
  const again = scorer.score(vector);
  const equal =
    evidence === null
      ? again.logit === logit && again.leverage === leverage
      : vectorToBytes(packEvidence(evidenceOf(scorer, vector))).equals(evidence);
  return {
    derived: again.logit,
    equal,
    withoutSignals: whatWouldChange(scorer, vector, spans).map(withoutSignalView),
  };
}

async function recordReading(ctx: Context, caseId: string, view: DerivationView): Promise<void> {
  await inTransaction(ctx.db, (tx) =>
    appendTrail(ctx, tx, {
      act: "trail.read",
      subjectKind: view.kind === "decision" ? "decision" : "score",
      subjectId: view.scoreId,
      facts: { caseId, derivedEqual: view.equal },
    }),
  );
}
