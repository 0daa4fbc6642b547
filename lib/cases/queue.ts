import "server-only";
import { and, eq, inArray } from "drizzle-orm";
import { alias } from "drizzle-orm/mysql-core";
import type { Executor } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { people } from "@/db/schema/people";
import { transactions } from "@/db/schema/transactions";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { natsToDecibans, probabilityOf } from "../decibans";
import { formatAmount } from "../money";
import { policyInForce } from "../policy/read";
import { UNDECIDED_STATES } from "./codes";
import { placeOf } from "./cursor";
import { matcherOf } from "./queue-filter";
import { pageOf, type RankedCase } from "./queue-page";
import { rankingOf } from "./ranking/ranking";
import type { QueueInput, QueueItem, QueueView } from "./schema";
import { readerOf } from "./visibility";

const assignee = alias(people, "assignee");
const claimer = alias(people, "claimer");

/** A page of the waiting cases this person may see, in the policy's order. @throws KnownError invalid */
export async function listQueue(ctx: Context, input: QueueInput): Promise<QueueView> {
  demand(ctx, "cases.read");
  const now = ctx.now();
  const reader = readerOf(ctx.actor);
  const matches = matcherOf(input, reader);
  const after = input.cursor === undefined ? null : placeOf(input.cursor);
  const page = await rankingOf(ctx.db).read(now, (view) => pageOf(view, reader, matches, after, input.limit));
  const { version, total, next } = page;
  const { terms } = await policyInForce(ctx.db, now);
  const items = await readItems(ctx.db, page.cases, terms.hideScoreUntilVerdict, now);
  return { version, total, items, next };
}

/** The ranking says which and in which order; what is shown of them is read from the database. */
async function readItems(
  db: Executor,
  ranked: readonly RankedCase[],
  hidesScores: boolean,
  now: Date,
): Promise<QueueItem[]> {
  if (ranked.length === 0) return [];
  const rows = await db
    .select({
      caseId: cases.id,
      number: cases.number,
      externalId: transactions.externalId,
      accountId: transactions.accountId,
      amountMinor: transactions.amountMinor,
      currency: transactions.currency,
      channel: transactions.channel,
      occurredAt: transactions.occurredAt,
      zone: cases.zone,
      kind: cases.kind,
      state: cases.state,
      paymentState: transactions.paymentState,
      holdExpiresAt: transactions.holdExpiresAt,
      dueAt: cases.dueAt,
      assignedTo: cases.assignedTo,
      assignedName: assignee.name,
      claimedBy: cases.claimedBy,
      claimedName: claimer.name,
    })
    .from(cases)
    .innerJoin(transactions, eq(transactions.id, cases.transactionId))
    .leftJoin(assignee, eq(assignee.id, cases.assignedTo))
    .leftJoin(claimer, eq(claimer.id, cases.claimedBy))
    .where(
      and(
        inArray(
          cases.id,
          ranked.map(({ caseId }) => caseId),
        ),
        // Decided a moment ago, perhaps by another server.
        inArray(cases.state, [...UNDECIDED_STATES]),
      ),
    );
  const byId = new Map(rows.map((row) => [row.caseId, row]));
  return ranked.flatMap(({ caseId, logit }) => {
    const row = byId.get(caseId);
    if (!row) return [];
    const { amountMinor, assignedName, claimedName, assignedTo, claimedBy, ...same } = row;
    return {
      ...same,
      amount: formatAmount(amountMinor, row.currency),
      occurredAt: row.occurredAt.toISOString(),
      probability: hidesScores ? null : probabilityOf(logit),
      evidenceDecibans: hidesScores ? null : natsToDecibans(logit),
      holdExpiresAt: row.holdExpiresAt?.toISOString() ?? null,
      dueAt: row.dueAt.toISOString(),
      overdue: row.dueAt.getTime() < now.getTime(),
      assignedTo: assignedTo && assignedName ? { id: assignedTo, name: assignedName } : null,
      claimedBy: claimedBy && claimedName ? { id: claimedBy, name: claimedName } : null,
    };
  });
}
