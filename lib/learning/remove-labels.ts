import "server-only";
import { and, asc, inArray, isNotNull } from "drizzle-orm";
import type { Database, Tx } from "@/db/client";
import { outcomes } from "@/db/schema/outcomes";
import { signalRefreshes } from "@/db/schema/scorers";
import { transactions } from "@/db/schema/transactions";
import type { Context } from "../context";
import { lockPayments } from "../outcomes/apply";
import { labelOf } from "../outcomes/rules";
import type { Label } from "../scorer";
import { appendTrail } from "../trail/append";
import { findRemovals, type Removal, type RemovalSpan } from "./find-removals";
import { lockScorerInUse, readScorerInUse, saveScorer } from "./held-scorer";
import { labelFromOutcomes, type OutcomeLabel } from "./label-outcomes";
import { forgetEntities, markEntities } from "./mark-label";
import { foldAhead, type ReplacedAhead, type Replacement, replaceLabels } from "./replace";

/** As it stands in an approval. */
export type RemovalSubject = { personId: string; from: string | null; to: string | null };

export const spanOf = ({ personId, from, to }: RemovalSubject): RemovalSpan => ({
  personId,
  from: from === null ? null : new Date(from),
  to: to === null ? null : new Date(to),
});

/** The long part of a removal, done before anything is locked. */
export async function foldRemovalAhead(
  db: Database,
  subject: RemovalSubject,
): Promise<ReplacedAhead | undefined> {
  const held = await readScorerInUse(db);
  const removals = await findRemovals(db, spanOf(subject), held.logSeq);
  return removals.length === 0 ? undefined : foldAhead(db, held, removals);
}

/**
 * Takes one person's labels out of the log and re-runs it, so that the weights are bit for bit those of a log in which
 * that person never found anything in the span. Only the scorer and the history signals forget: verdicts, the
 * payments' labels for the ledger and the money stay as they are. Where nothing holds any more, a stored outcome that
 * had only agreed speaks again; a later finding by somebody else labels anew, at a place of its own.
 */
export async function removeLabels(
  ctx: Context,
  tx: Tx,
  subject: RemovalSubject,
  ahead?: ReplacedAhead,
): Promise<void> {
  const now = ctx.now();
  const agreeing = await lockAgreeingOutcomes(tx, subject);
  const held = await lockScorerInUse(tx);
  const versionBefore = held.version;
  const removals = await findRemovals(tx, spanOf(subject), held.logSeq);
  const replacements = removals.map((removal) => replacementOf(subject.personId, removal));
  await replaceLabels(tx, held, now, replacements, ahead);
  await saveScorer(tx, held, now);
  await forgetInSignals(tx, now, removals);
  const bare = new Set(removals.flatMap((removal) => (removal.label === 0 ? removal.transactionId : [])));
  const speaking = agreeing.filter(({ transactionId }) => bare.has(transactionId));
  const effects = await labelFromOutcomes(tx, now, speaking);
  const { version } = await lockScorerInUse(tx);
  await appendTrail(ctx, tx, {
    act: "labels.removed",
    subjectKind: "person",
    subjectId: subject.personId,
    facts: {
      from: subject.from,
      to: subject.to,
      labels: removals.length,
      givenBack: removals.length - bare.size,
      labelledByOutcomes: effects.filter(({ changed }) => changed).length,
      versionBefore,
      versionAfter: version,
    },
  });
}

/**
 * Outcomes that say fraud of payments whose label would go: one that only agreed with the finding left none of its own.
 * Their payments and cases are locked here, before the scorer, as whoever applies outcomes does.
 */
async function lockAgreeingOutcomes(tx: Tx, subject: RemovalSubject): Promise<OutcomeLabel[]> {
  const removals = await findRemovals(tx, spanOf(subject), Number.MAX_SAFE_INTEGER);
  const agreeing: OutcomeLabel[] = [];
  for (const ids of inParts(removals.map(({ transactionId }) => transactionId))) {
    const rows = await tx
      .select()
      .from(outcomes)
      .where(and(inArray(outcomes.transactionId, ids), isNotNull(outcomes.appliedAt)))
      .orderBy(asc(outcomes.id));
    for (const row of rows) {
      // What clears a payment is weaker than a decided case, and every payment here has one.
      if (row.transactionId === null || labelOf(row) !== 1) continue;
      agreeing.push({ transactionId: row.transactionId, outcomeId: row.id, label: 1 });
    }
  }
  await lockPayments(
    tx,
    agreeing.map(({ transactionId }) => transactionId),
  );
  return agreeing;
}

function replacementOf(personId: string, { place, label, transactionId, holdsAgain }: Removal): Replacement {
  return {
    kind: "removal",
    place,
    label,
    transactionId,
    personId,
    caseId: holdsAgain?.caseId ?? null,
    decisionId: holdsAgain?.decisionId ?? null,
    outcomeId: holdsAgain?.outcomeId ?? null,
  };
}

/** History signals are drawn from labels too, so they follow the log; cases that share an entity are scored anew. */
async function forgetInSignals(tx: Tx, now: Date, removals: readonly Removal[]): Promise<void> {
  for (const part of inParts(removals)) {
    const ids = part.map(({ transactionId }) => transactionId);
    await forgetEntities(tx, ids);
    await tx.insert(signalRefreshes).values(ids.map((transactionId) => ({ transactionId, createdAt: now })));
  }
  const labels = new Map(removals.map(({ transactionId, label }) => [transactionId, label]));
  const givenBack = removals.flatMap((removal) => (removal.label === 0 ? [] : removal.transactionId));
  for (const ids of inParts(givenBack)) {
    const rows = await tx.select().from(transactions).where(inArray(transactions.id, ids));
    for (const row of rows) await markEntities(tx, row, labels.get(row.id) as Label, now);
  }
}

const ROWS_IN_STATEMENT = 1_000;

function* inParts<T>(all: readonly T[]): Generator<T[]> {
  for (let from = 0; from < all.length; from += ROWS_IN_STATEMENT) {
    yield all.slice(from, from + ROWS_IN_STATEMENT);
  }
}
