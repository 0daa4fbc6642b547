import "server-only";
import { setTimeout as sleep } from "node:timers/promises";
import { and, asc, desc, eq, gt, inArray, max, type SQL, sql } from "drizzle-orm";
import type { Executor, Tx } from "@/db/client";
import { vectorToBytes } from "@/db/columns";
import { cases } from "@/db/schema/cases";
import { signalRefreshes } from "@/db/schema/scorers";
import { scores, transactions } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { type HeldScorer, readScorerInUse } from "../learning/held-scorer";
import { log } from "../log";
import { policyInForce } from "../policy/read";
import { zoneOf } from "../policy/rules";
import { thresholdsInForce } from "../policy/thresholds";
import { recomputeVectors } from "../signals/recompute";
import type { SignalVector } from "../signals/vectors";
import { UNDECIDED_STATES } from "./codes";
import { casesRescored } from "./notify";

/** Labels whose linked cases are refreshed in one go. */
const LABELS_IN_BATCH = 200;
/** Cases refreshed in one transaction: so long a decision on one of them may have to wait. */
const CASES_IN_TURN = 20;
/** Decisions come first: between two turns this rests so many times as long as the last one took. */
const REST_FACTOR = 16;
/** What one batch may take on. Those beyond keep the signals they have. */
const MOST_REFRESHED = 500;
/**
 * The closest ties first: many strangers may pay the same counterparty. An entity may have taken part in any number of
 * payments; the newest are looked at.
 */
const TIES: readonly Tie[] = [
  { column: "accountId", closeness: 0, newest: 2_000 },
  { column: "deviceId", closeness: 0, newest: 2_000 },
  { column: "cardRef", closeness: 0, newest: 2_000 },
  { column: "counterpartyId", closeness: 1, newest: MOST_REFRESHED },
];
const CLOSEST_TIES = TIES.filter(({ closeness }) => closeness === 0);

type Tie = {
  column: "accountId" | "deviceId" | "cardRef" | "counterpartyId";
  closeness: number;
  newest: number;
};

type Wish = { id: number; transactionId: string };
type Linked = { caseId: string; transactionId: string };

/**
 * Gives waiting cases that share an account, card, device or counterparty with a newly labelled payment their history
 * signals anew, as a further score. What was scored before stays; the case's revision does not rise.
 * The wish to refresh is written with the label and goes with the last new scores, so that a crash loses nothing.
 */
export async function refreshLinkedCases(ctx: Context, signal: AbortSignal): Promise<void> {
  demand(ctx, "desk.work");
  while (!signal.aborted) {
    const wishes = await listWishes(ctx.db, 0);
    if (wishes.length === 0 || !(await fulfil(ctx, wishes, signal))) return;
  }
}

const listWishes = (db: Executor, afterId: number): Promise<Wish[]> =>
  db
    .select({ id: signalRefreshes.id, transactionId: signalRefreshes.transactionId })
    .from(signalRefreshes)
    .where(gt(signalRefreshes.id, afterId))
    .orderBy(asc(signalRefreshes.id))
    .limit(LABELS_IN_BATCH);

/** @returns false when another server is at it, or this one is to stop */
async function fulfil(ctx: Context, wishes: readonly Wish[], signal: AbortSignal): Promise<boolean> {
  const linked = await findLinked(ctx.db, wishes, TIES);
  let lifted = wishes.at(-1)?.id ?? 0;
  for (let from = 0; from === 0 || from < linked.length; from += CASES_IN_TURN) {
    if (signal.aborted) return false;
    const startedMs = performance.now();
    const turn = linked.slice(from, from + CASES_IN_TURN);
    const isLast = from + CASES_IN_TURN >= linked.length;
    const refreshed = await inTransaction(ctx.db, (tx) => refreshTurn(ctx, tx, wishes, turn, isLast));
    if (refreshed === null) return false;
    casesRescored(refreshed);
    if (turn.length > 0) await rest(REST_FACTOR * (performance.now() - startedMs), signal);
    lifted = await liftClosest(ctx, lifted);
  }
  return true;
}

/**
 * The closest ties of labels that came meanwhile: nobody should wait for the many customers of a counterparty. Their
 * wishes stay, and have their own batch. @returns the last wish looked at
 */
async function liftClosest(ctx: Context, afterId: number): Promise<number> {
  const wishes = await listWishes(ctx.db, afterId);
  const last = wishes.at(-1);
  if (!last) return afterId;
  const turn = (await findLinked(ctx.db, wishes, CLOSEST_TIES)).slice(0, CASES_IN_TURN);
  casesRescored((await inTransaction(ctx.db, (tx) => refreshTurn(ctx, tx, wishes, turn, false))) ?? []);
  return last.id;
}

/** Ends early when the server stops. */
async function rest(ms: number, signal: AbortSignal): Promise<void> {
  await sleep(ms, undefined, { ref: false, signal }).catch(() => undefined);
}

/** @returns the refreshed cases, or null while another server is at it: one at a time, or older signals might win */
async function refreshTurn(
  ctx: Context,
  tx: Tx,
  wishes: readonly Wish[],
  turn: readonly Linked[],
  isLast: boolean,
): Promise<string[] | null> {
  const theirs = inArray(
    signalRefreshes.id,
    wishes.map(({ id }) => id),
  );
  const locked = await tx
    .select({ id: signalRefreshes.id })
    .from(signalRefreshes)
    .where(theirs)
    .for("update", { skipLocked: true });
  if (locked.length < wishes.length) return null;
  const held = await readScorerInUse(tx);
  const vectors = await recomputeVectors(
    ctx.db,
    turn.map(({ transactionId }) => transactionId),
    held.signals,
  );
  const present = await presentVectors(tx, turn);
  const changed = turn.filter(({ caseId, transactionId }) => {
    const fresh = vectors.get(transactionId);
    const before = present.get(caseId);
    return fresh !== undefined && before !== undefined && !vectorToBytes(fresh.vector).equals(before);
  });
  await writeScores(ctx, tx, held, changed, vectors);
  if (isLast) await tx.delete(signalRefreshes).where(theirs);
  return changed.map(({ caseId }) => caseId);
}

/** Vectors of those that still wait. */
async function presentVectors(tx: Tx, turn: readonly Linked[]): Promise<Map<string, Buffer>> {
  if (turn.length === 0) return new Map();
  const rows = await tx
    .select({ caseId: cases.id, vector: scores.vector })
    .from(cases)
    .innerJoin(scores, eq(scores.id, cases.scoreId))
    .where(
      and(
        inArray(
          cases.id,
          turn.map(({ caseId }) => caseId),
        ),
        inArray(cases.state, [...UNDECIDED_STATES]),
      ),
    );
  return new Map(rows.map(({ caseId, vector }) => [caseId, vector]));
}

/**
 * Waiting cases that share an entity with one of the payments: of each entity its newest payments, those of an account,
 * device or card before those of a counterparty, and the newest first.
 */
async function findLinked(db: Executor, wishes: readonly Wish[], ties: readonly Tie[]): Promise<Linked[]> {
  const labelled = [...new Set(wishes.map(({ transactionId }) => transactionId))];
  const payments = await db
    .select({
      accountId: transactions.accountId,
      cardRef: transactions.cardRef,
      deviceId: transactions.deviceId,
      counterpartyId: transactions.counterpartyId,
    })
    .from(transactions)
    .where(inArray(transactions.id, labelled));
  const keys = new Map<string, SQL>();
  for (const payment of payments) {
    for (const tie of ties) {
      const key = payment[tie.column];
      if (key !== null) keys.set(`${tie.column} ${key}`, newestOf(tie, key));
    }
  }
  if (keys.size === 0) return [];
  const newest = sql.join([...keys.values()], sql` union all `);
  const linked = sql`(select id, min(closeness) as closeness from (${newest}) tied group by id) linked`;
  const rows = await db
    .select({ caseId: cases.id, transactionId: cases.transactionId })
    .from(cases)
    .innerJoin(linked, sql`linked.id = ${cases.transactionId}`)
    .innerJoin(transactions, eq(transactions.id, cases.transactionId))
    .where(inArray(cases.state, [...UNDECIDED_STATES]))
    .orderBy(sql`linked.closeness`, desc(transactions.occurredAt), desc(cases.number))
    .limit(MOST_REFRESHED + 1);
  if (rows.length > MOST_REFRESHED) {
    log.warn(
      { labelledPayments: labelled.length, mostRefreshed: MOST_REFRESHED },
      "More waiting cases are linked to new labels than are refreshed at once; the closest and newest are",
    );
  }
  return rows.slice(0, MOST_REFRESHED);
}

function newestOf({ column, closeness, newest }: Tie, key: string): SQL {
  return sql`(select id, ${sql.raw(String(closeness))} as closeness from ${transactions}
    where ${transactions[column]} = ${key}
    order by ${transactions.occurredAt} desc limit ${sql.raw(String(newest))})`;
}

/** Writes fresh scores of waiting cases; one that was decided meanwhile keeps the score it has. */
export async function writeScores(
  ctx: Context,
  tx: Tx,
  { scorer, version, signals }: HeldScorer,
  changed: readonly Pick<Linked, "caseId" | "transactionId">[],
  vectors: ReadonlyMap<string, SignalVector>,
): Promise<void> {
  if (changed.length === 0) return;
  const now = ctx.now();
  const policy = await policyInForce(tx, now);
  const thresholds = await thresholdsInForce(tx, policy, now);
  await tx.insert(scores).values(
    changed.map(({ transactionId }) => {
      const { vector, missing } = vectors.get(transactionId) as SignalVector;
      const { logit, leverage } = scorer.score(vector);
      return {
        transactionId,
        kind: "refresh" as const,
        takenAt: now,
        vector: vectorToBytes(vector),
        missing: Buffer.from(missing),
        signalSetVersion: signals.version,
        scorerVersion: version,
        policyVersion: policy.version,
        logit,
        leverage,
        zone: zoneOf(logit, thresholds),
      };
    }),
  );
  const scoreIds = await newestRefreshes(
    tx,
    changed.map(({ transactionId }) => transactionId),
  );
  const caseIds = changed.map(({ caseId }) => caseId);
  await tx
    .select({ id: cases.id })
    .from(cases)
    .where(inArray(cases.id, caseIds))
    .orderBy(asc(cases.id))
    .for("update");
  // One that was decided meanwhile keeps the score its verdict was given on.
  await tx.execute(sql`
    update ${cases} join ${scores} on ${scores.transactionId} = ${cases.transactionId}
    set ${cases.scoreId} = ${scores.id}, ${cases.changedAt} = ${ctx.now()}
    where ${inArray(scores.id, scoreIds)} and ${inArray(cases.state, [...UNDECIDED_STATES])}`);
}

/** Read back: how far apart the ids of one statement's rows are is the database's own affair. */
async function newestRefreshes(tx: Tx, transactionIds: readonly string[]): Promise<number[]> {
  const rows = await tx
    .select({ id: max(scores.id) })
    .from(scores)
    .where(and(inArray(scores.transactionId, [...transactionIds]), eq(scores.kind, "refresh")))
    .groupBy(scores.transactionId);
  return rows.flatMap(({ id }) => id ?? []);
}
