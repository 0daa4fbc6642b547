import "server-only";
import { and, between, desc, eq, inArray, ne, type SQL, sql } from "drizzle-orm";
import { z } from "zod";
import type { Executor } from "@/db/client";
import { cases, decisions } from "@/db/schema/cases";
import { labelledEntities, scores, transactions } from "@/db/schema/transactions";
import { probabilityOf } from "../decibans";
import { formatAmount } from "../money";
import { UNDECIDED_STATES } from "./codes";
import { LinkedCase } from "./schema";

type Payment = Pick<
  typeof transactions.$inferSelect,
  "id" | "accountId" | "cardRef" | "deviceId" | "counterpartyId" | "occurredAt"
>;
type By = z.infer<typeof LinkedCase>["by"];

const LinkRows = z.array(z.object({ by: LinkedCase.shape.by, id: z.string() }));

const DAY_MS = 86_400_000;
/** An escalated case is its supervisor's to decide, by itself. */
const DECIDABLE_STATES = UNDECIDED_STATES.filter((state) => state !== "escalated");
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
  for (const { by, id } of await linkedIds(db, payment)) if (!linked.has(id)) linked.set(id, by);
  if (linked.size === 0) return [];
  const rows = await db
    .select({
      transaction: {
        id: transactions.id,
        externalId: transactions.externalId,
        accountId: transactions.accountId,
        occurredAt: transactions.occurredAt,
        amountMinor: transactions.amountMinor,
        currency: transactions.currency,
        channel: transactions.channel,
        label: transactions.label,
      },
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
      (state === null || DECIDABLE_STATES.some((decidable) => decidable === state)),
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

/** In one statement; each part of it is answered from an index and bounded. */
async function linkedIds(db: Executor, payment: Payment): Promise<{ by: By; id: string }[]> {
  const parts = entitiesOf(payment).flatMap(({ by, key }) => [
    ...(by === "account" ? [nearest(by, key, payment, TOGETHER_MS, MOST_TOGETHER)] : []),
    nearest(by, key, payment, PAST_MS, MOST_RECENT),
    labelled(by, key, payment),
  ]);
  const [rows] = await db.execute(sql.join(parts, sql` union all `));
  return LinkRows.parse(rows);
}

function nearest(by: By, key: string, { id, occurredAt }: Payment, beforeMs: number, limit: number): SQL {
  const atMs = occurredAt.getTime();
  const during = between(transactions.occurredAt, new Date(atMs - beforeMs), new Date(atMs + TOGETHER_MS));
  return sql`(select ${by} as ${sql.identifier("by")}, id from ${transactions}
    where ${and(eq(COLUMNS[by], key), ne(transactions.id, id), during)}
    order by ${transactions.occurredAt} desc limit ${limit})`;
}

/** Fraud first. */
function labelled(by: By, key: string, { id }: Payment): SQL {
  const { entityKind, entityKey, transactionId, label, occurredAt } = labelledEntities;
  return sql`(select ${by}, ${transactionId} from ${labelledEntities}
    where ${and(eq(entityKind, by), eq(entityKey, key), ne(transactionId, id))}
    order by ${label} desc, ${occurredAt} desc limit ${MOST_LABELLED})`;
}

/** A label that an outcome brought, where nobody gave a verdict. */
function labelVerdict(label: number | null): "fraudulent" | "legitimate" | null {
  if (label === null) return null;
  return label === 1 ? "fraudulent" : "legitimate";
}
