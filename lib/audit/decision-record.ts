import "server-only";
import { asc, eq } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { cases, decisions } from "@/db/schema/cases";
import { apiKeys, people } from "@/db/schema/people";
import { policies } from "@/db/schema/policies";
import { trail } from "@/db/schema/trail";
import { scores, transactions } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { demandPerson, mayDo } from "../auth/demand";
import { decisionView } from "../cases/read";
import { readEvidenceShown } from "../cases/read-evidence";
import type { Context, PersonActor } from "../context";
import { forbidden, notFound } from "../errors";
import { scorerAsOf } from "../learning/as-of";
import { evidenceOf, packEvidence } from "../learning/evidence";
import { signalSetOfVersion } from "../learning/lineage";
import { formatAmount } from "../money";
import { listRecords } from "../policy/records";
import { fitVector } from "../signals/read-signal-set";
import { appendTrail } from "../trail/append";
import { entryViews } from "../trail/entry-views";
import type { DecisionRecordInput, DecisionRecordView } from "./schema";

/** Entries of one case that are worth a screen; a case with more has been fought over by machines. */
const ENTRIES_AT_MOST = 500;

/**
 * One decision as it was when it was made. Reviewers see those of cases they decided; reading by those who read
 * everybody's is itself recorded. @throws KnownError not_found, forbidden
 */
export async function readDecisionRecord(
  ctx: Context,
  { id }: DecisionRecordInput,
): Promise<DecisionRecordView> {
  const actor = demandPerson(ctx, "trail.own");
  const row = await findRow(ctx.db, id);
  if (!row) throw notFound("This decision");
  await refuseOthers(ctx, actor, row.case.id);
  const { decision } = row;
  const [policy] = await listRecords(
    ctx.db,
    eq(policies.version, decision.policyVersion),
    asc(policies.proposedAt),
  );
  if (!policy) throw new Error(`Policy version ${decision.policyVersion} is not there`);
  const view: DecisionRecordView = {
    decision: decisionView({ decision, name: row.personName }),
    case: { id: row.case.id, number: row.case.number, kind: row.case.kind, zone: decision.zone },
    byKey: row.keyName,
    transaction: transactionView(row.transaction),
    handlingSeconds: decision.handlingSeconds,
    scoreWasHidden: decision.scoreWasHidden === 1,
    evidence: await readEvidenceShown(ctx.db, decision),
    scorerVersionAfter: decision.scorerVersionAfter,
    rederivedEqual: await isRederivedEqual(ctx.db, decision),
    policy,
    entries: await caseEntries(ctx.db, row.case.id),
  };
  if (mayDo(actor, "trail.read")) await recordReading(ctx, row);
  return view;
}

type Row = NonNullable<Awaited<ReturnType<typeof findRow>>>;

async function findRow(db: Executor, id: string) {
  const [row] = await db
    .select({
      decision: decisions,
      case: { id: cases.id, number: cases.number, kind: cases.kind },
      transaction: transactions,
      personName: people.name,
      keyName: apiKeys.name,
    })
    .from(decisions)
    .innerJoin(cases, eq(cases.id, decisions.caseId))
    .innerJoin(transactions, eq(transactions.id, decisions.transactionId))
    .innerJoin(people, eq(people.id, decisions.personId))
    .leftJoin(apiKeys, eq(apiKeys.id, decisions.apiKeyId))
    .where(eq(decisions.id, id));
  return row;
}

async function refuseOthers(ctx: Context, actor: PersonActor, caseId: string): Promise<void> {
  if (mayDo(actor, "trail.read")) return;
  const onCase = await ctx.db
    .select({ personId: decisions.personId })
    .from(decisions)
    .where(eq(decisions.caseId, caseId));
  if (!onCase.some(({ personId }) => personId === actor.personId)) {
    throw forbidden("Reviewers see the record of cases that they decided themselves");
  }
}

async function isRederivedEqual(db: Executor, decision: Row["decision"]): Promise<boolean> {
  const [score] = await db
    .select({ transactionId: scores.transactionId, vector: scores.vector })
    .from(scores)
    .where(eq(scores.id, decision.scoreId));
  if (!score) throw new Error(`Score ${decision.scoreId} is not there`);
  const scorer = await scorerAsOf(db, decision.scorerVersionBefore);
  const signals = await signalSetOfVersion(db, decision.scorerVersionBefore);
  const vector = await fitVector(db, signals, score.transactionId, score.vector);
  const again = packEvidence(evidenceOf(scorer, vector));
  return vectorToBytes(again).equals(decision.evidence);
}

async function caseEntries(db: Executor, caseId: string) {
  const rows = await db
    .select()
    .from(trail)
    .where(eq(trail.caseId, caseId))
    .orderBy(asc(trail.seq))
    .limit(ENTRIES_AT_MOST);
  return entryViews(db, rows);
}

async function recordReading(ctx: Context, row: Row): Promise<void> {
  await inTransaction(ctx.db, (tx) =>
    appendTrail(ctx, tx, {
      act: "trail.read",
      subjectKind: "decision",
      subjectId: row.decision.id,
      facts: { caseId: row.case.id },
    }),
  );
}

function transactionView(transaction: Row["transaction"]): DecisionRecordView["transaction"] {
  return {
    id: transaction.id,
    source: transaction.source,
    externalId: transaction.externalId,
    occurredAt: transaction.occurredAt.toISOString(),
    amount: formatAmount(transaction.amountMinor, transaction.currency),
    currency: transaction.currency,
    channel: transaction.channel,
  };
}
