import "server-only";
import { and, asc, between, desc, eq, inArray, ne, sql } from "drizzle-orm";
import type { z } from "zod";
import type { Executor } from "@/db/client";
import { cases, decisions } from "@/db/schema/cases";
import { labelledEntities, scores, transactions } from "@/db/schema/transactions";
import { probabilityOf } from "../decibans";
import { formatAmount } from "../money";
import { UNDECIDED_STATES } from "./codes";
import type { LinkedCase } from "./schema";

type Payment = Pick<
  typeof transactions.$inferSelect,
  "id" | "accountId" | "cardRef" | "deviceId" | "counterpartyId" | "occurredAt"
>;
type By = z.infer<typeof LinkedCase>["by"];

const DAY_MS = 86_400_000;
const TOGETHER_MS = DAY_MS;
const PAST_MS = 30 * DAY_MS;
/** Payments of the account that can be decided in the same act. */
const MOST_TOGETHER = 50;
const MOST_RECENT = 8;
const MOST_LABELLED = 8;

const COLUMNS = {
  account: transactions.accountId,
  card: transactions.cardRef,
  device: transactions.deviceId,
  counterparty: transactions.counterpartyId,
} as const;

/**
 * Other payments of the same account, card, device or counterparty: those near in time, and those with a label,
 * a bounded number of each by index. A payment linked in two ways is shown under the first of them.
 */
export async function readLinks(db: Executor, payment: Payment): Promise<z.infer<typeof LinkedCase>[]> {
  const linked = new Map<string, By>();
  for (const { by, key } of entitiesOf(payment)) {
    for (const id of await linkedIds(db, by, key, payment)) if (!linked.has(id)) linked.set(id, by);
  }
  if (linked.size === 0) return [];
  const rows = await db
    .select({
      transaction: transactions,
      caseId: cases.id,
      number: cases.number,
      state: cases.state,
      verdict: decisions.verdict,
      logit: sql<number>`coalesce((select s.logit from ${scores} s where s.id = ${cases.scoreId}), (select s.logit from ${scores} s where s.transaction_id = ${transactions.id} and s.kind = 'arrival' limit 1))`,
    })
    .from(transactions)
    .leftJoin(cases, eq(cases.transactionId, transactions.id))
    .leftJoin(decisions, eq(decisions.standsForCaseId, cases.id))
    .where(inArray(transactions.id, [...linked.keys()]))
    .orderBy(desc(transactions.occurredAt));
  return rows.map(({ transaction, caseId, number, state, verdict, logit }) => ({
    by: linked.get(transaction.id) as By,
    transactionId: transaction.id,
    caseId,
    number,
    externalId: transaction.externalId,
    accountId: transaction.accountId,
    occurredAt: transaction.occurredAt.toISOString(),
    amount: formatAmount(transaction.amountMinor, transaction.currency),
    currency: transaction.currency,
    channel: transaction.channel,
    state,
    verdict: verdict ?? labelVerdict(transaction.label),
    probability: probabilityOf(Number(logit)),
    together:
      transaction.accountId === payment.accountId &&
      Math.abs(transaction.occurredAt.getTime() - payment.occurredAt.getTime()) <= TOGETHER_MS &&
      (state === null || UNDECIDED_STATES.some((undecided) => undecided === state)),
  }));
}

function entitiesOf(payment: Payment): { by: By; key: string }[] {
  const keys: Record<By, string | null> = {
    account: payment.accountId,
    card: payment.cardRef,
    device: payment.deviceId,
    counterparty: payment.counterpartyId,
  };
  return (Object.keys(keys) as By[]).flatMap((by) => {
    const key = keys[by];
    return key === null ? [] : [{ by, key }];
  });
}

async function linkedIds(db: Executor, by: By, key: string, payment: Payment): Promise<string[]> {
  const atMs = payment.occurredAt.getTime();
  const others = and(eq(COLUMNS[by], key), ne(transactions.id, payment.id));
  const near = (fromMs: number, toMs: number) =>
    between(transactions.occurredAt, new Date(fromMs), new Date(toMs));
  const ids = db.select({ id: transactions.id }).from(transactions);
  const together =
    by === "account"
      ? await db
          .select({ id: transactions.id })
          .from(transactions)
          .where(and(others, near(atMs - TOGETHER_MS, atMs + TOGETHER_MS)))
          .orderBy(asc(transactions.occurredAt))
          .limit(MOST_TOGETHER)
      : [];
  const recent = await ids
    .where(and(others, near(atMs - PAST_MS, atMs + TOGETHER_MS)))
    .orderBy(desc(transactions.occurredAt))
    .limit(MOST_RECENT);
  const labelled = await db
    .select({ id: labelledEntities.transactionId })
    .from(labelledEntities)
    .where(
      and(
        eq(labelledEntities.entityKind, by),
        eq(labelledEntities.entityKey, key),
        ne(labelledEntities.transactionId, payment.id),
      ),
    )
    .orderBy(desc(labelledEntities.label), desc(labelledEntities.occurredAt))
    .limit(MOST_LABELLED);
  return [...together, ...recent, ...labelled].map(({ id }) => id);
}

/** A label that an outcome brought, where nobody gave a verdict. */
function labelVerdict(label: number | null): "fraudulent" | "legitimate" | null {
  if (label === null) return null;
  return label === 1 ? "fraudulent" : "legitimate";
}
