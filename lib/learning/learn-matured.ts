import "server-only";
import { and, count, eq, gte, inArray, isNull, lt, notExists, type SQL, sql } from "drizzle-orm";
import type { Database, Executor } from "@/db/client";
import { cases, decisions } from "@/db/schema/cases";
import { outcomes } from "@/db/schema/outcomes";
import { labelLog } from "@/db/schema/scorers";
import { scores, transactions } from "@/db/schema/transactions";
import { inTransaction } from "@/db/tx";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { newId } from "../new-id";
import { policyInForce } from "../policy/read";
import { fitVectors } from "../signals/read-signal-set";
import { appendTrail } from "../trail/append";
import type { Channel } from "../transactions/codes";
import { lockScorerInUse, saveScorer } from "./held-scorer";
import { learnLabel } from "./learn";

const DAY_MS = 86_400_000;
/** Decisions wait for the scorer's lock meanwhile. */
const IN_ONE_TRANSACTION = 25;
const CARDS: readonly Channel[] = ["card_present", "card_remote"];
const OTHER: readonly Channel[] = ["cash_withdrawal", "credit_transfer", "instant_transfer", "direct_debit"];

/** A whole UTC day of payments of some channels. */
type Day = { from: Date; to: Date; channels: readonly Channel[] };

/**
 * Where the policy says so, learns as legitimate a random choice of the payments that passed, that nobody labelled,
 * reviewed or reported, and whose label would have become final a day ago: no more of them than people decided cases
 * yesterday, so that what people find keeps its weight. They teach the scorer only: the payments stay unlabelled, and
 * the signals of known labels do not count them.
 */
export async function learnMatured(ctx: Context, signal: AbortSignal): Promise<void> {
  demand(ctx, "outcomes.send");
  const now = ctx.now();
  const { terms } = await policyInForce(ctx.db, now);
  if (terms.maturedUnlabelled === "ignored") return;
  const days = [dayOf(now, terms.maturityDays.cards, CARDS), dayOf(now, terms.maturityDays.other, OTHER)];
  const drawn = await draw(ctx.db, days, await decidedOn(ctx.db, dayOf(now, 0, [])));
  for (let from = 0; from < drawn.length && !signal.aborted; from += IN_ONE_TRANSACTION) {
    // The ranking follows the log by itself.
    await learnSome(ctx, drawn.slice(from, from + IN_ONE_TRANSACTION));
  }
}

/** The last whole day before those days began. */
function dayOf(now: Date, days: number, channels: readonly Channel[]): Day {
  const to = Math.floor(now.getTime() / DAY_MS) * DAY_MS - days * DAY_MS;
  return { from: new Date(to - DAY_MS), to: new Date(to), channels };
}

async function decidedOn(db: Database, { from, to }: Day): Promise<number> {
  const [row] = await db
    .select({ decided: count() })
    .from(decisions)
    .where(
      and(
        eq(decisions.kind, "decision"),
        gte(decisions.decidedAt, from),
        lt(decisions.decidedAt, to),
        isNull(decisions.undoneAt),
      ),
    );
  return row?.decided ?? 0;
}

async function draw(db: Database, days: readonly Day[], atMost: number): Promise<string[]> {
  if (atMost === 0) return [];
  const parts = await Promise.all(
    days.map(({ from, to, channels }) =>
      listUntouched(
        db,
        and(
          gte(transactions.occurredAt, from),
          lt(transactions.occurredAt, to),
          inArray(transactions.channel, [...channels]),
        ),
        atMost,
      ),
    ),
  );
  // Each part is a random choice with its own lot drawn, so the smallest of all are one of the whole.
  return parts
    .flat()
    .sort((a, b) => a.lot - b.lot)
    .slice(0, atMost)
    .map(({ id }) => id);
}

/** Passed payments that no person, outcome or label has touched, in random order. */
function listUntouched(db: Executor, where: SQL | undefined, atMost: number) {
  const lot = sql<number>`rand()`.mapWith(Number).as("lot");
  return db
    .select({ id: transactions.id, lot })
    .from(transactions)
    .where(
      and(
        where,
        eq(transactions.action, "pass"),
        isNull(transactions.label),
        notExists(db.select({ one: sql`1` }).from(cases).where(eq(cases.transactionId, transactions.id))),
        notExists(
          db.select({ one: sql`1` }).from(outcomes).where(eq(outcomes.transactionId, transactions.id)),
        ),
        notExists(
          db.select({ one: sql`1` }).from(labelLog).where(eq(labelLog.transactionId, transactions.id)),
        ),
      ),
    )
    .orderBy(sql`lot`)
    .limit(atMost);
}

async function learnSome(ctx: Context, ids: readonly string[]): Promise<void> {
  const now = ctx.now();
  await inTransaction(ctx.db, async (tx) => {
    const held = await lockScorerInUse(tx);
    // Under the lock no label can come any more: what was touched since the draw stays out.
    const still = await listUntouched(tx, inArray(transactions.id, [...ids]), ids.length);
    if (still.length === 0) return;
    const rows = await tx
      .select({ transactionId: scores.transactionId, vector: scores.vector })
      .from(scores)
      .where(
        and(
          eq(scores.kind, "arrival"),
          inArray(
            scores.transactionId,
            still.map(({ id }) => id),
          ),
        ),
      )
      .orderBy(scores.id);
    const vectors = await fitVectors(tx, held.signals, rows);
    const firstSeq = held.logSeq + 1;
    for (const [index, { transactionId }] of rows.entries()) {
      const source = { caseId: null, decisionId: null, outcomeId: null, personId: null };
      const vector = vectors[index] as Float64Array;
      await learnLabel(tx, held, now, { ...source, kind: "matured", transactionId }, vector, -1);
    }
    await saveScorer(tx, held, now);
    await appendTrail(ctx, tx, {
      act: "labels.matured",
      subjectKind: "batch",
      subjectId: newId(),
      facts: { count: rows.length, firstSeq, lastSeq: held.logSeq, scorerVersion: held.version },
    });
  });
}
