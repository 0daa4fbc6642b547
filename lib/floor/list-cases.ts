import "server-only";
import { aliasedTable, and, asc, count, desc, eq, isNull, like, lt, or, type SQL, sql } from "drizzle-orm";
import { cases } from "@/db/schema/cases";
import { people } from "@/db/schema/people";
import { transactions } from "@/db/schema/transactions";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { formatAmount } from "../money";
import { policyInForce } from "../policy/read";
import { cursorFor, type Place, placeOf } from "./cursor";
import { isExpiringHold, undecided } from "./read";
import type { FloorCase, FloorCasesInput, FloorCasesView } from "./schema";

/** What each sort compares; every case has a value, so that a page ends at one place. */
const SORT_VALUES = {
  due: sql`${cases.dueAt}`,
  opened: sql`${cases.openedAt}`,
  amount: sql`coalesce(${transactions.amountBaseMinor}, 0)`,
  hold: sql`if(${transactions.paymentState} = 'held', coalesce(${transactions.holdExpiresAt}, '9999-12-31'), '9999-12-31')`,
  number: sql`${cases.number}`,
};

const assignee = aliasedTable(people, "assignee");
const holder = aliasedTable(people, "holder");

/** Undecided cases for those who hand out the work. */
export async function listFloorCases(ctx: Context, input: FloorCasesInput): Promise<FloorCasesView> {
  demand(ctx, "floor.read");
  const now = ctx.now();
  const filters = await filtersOf(ctx, input, now);
  const [rows, total] = await Promise.all([
    pageOf(ctx, input, filters),
    ctx.db
      .select({ count: count() })
      .from(cases)
      .innerJoin(transactions, eq(transactions.id, cases.transactionId))
      .where(filters),
  ]);
  const page = rows.slice(0, input.limit);
  const last = page.at(-1);
  return {
    total: total[0]?.count ?? 0,
    items: page.map((row) => itemOf(row, now)),
    next:
      rows.length > input.limit && last
        ? cursorFor({ value: last.sortValue, number: last.row.number })
        : null,
  };
}

type Row = Awaited<ReturnType<typeof pageOf>>[number];

function pageOf({ db }: Context, input: FloorCasesInput, filters: SQL | undefined) {
  const value = SORT_VALUES[input.sort];
  const inOrder = input.direction === "ascending" ? asc : desc;
  const behind = input.cursor && isBehind(value, input.direction, placeOf(input.cursor));
  return db
    .select({
      row: cases,
      transaction: transactions,
      sortValue: sql<string>`cast(${value} as char)`,
      assignee: assignee.name,
      holder: holder.name,
    })
    .from(cases)
    .innerJoin(transactions, eq(transactions.id, cases.transactionId))
    .leftJoin(assignee, eq(assignee.id, cases.assignedTo))
    .leftJoin(holder, eq(holder.id, cases.claimedBy))
    .where(and(filters, behind || undefined))
    .orderBy(inOrder(value), inOrder(cases.number))
    .limit(input.limit + 1);
}

function isBehind(value: SQL, direction: FloorCasesInput["direction"], place: Place): SQL {
  const further = sql.raw(direction === "ascending" ? ">" : "<");
  return sql`(${value} ${further} ${place.value} or (${value} = ${place.value} and ${cases.number} ${further} ${place.number}))`;
}

async function filtersOf(ctx: Context, input: FloorCasesInput, now: Date): Promise<SQL | undefined> {
  const { state, zone, channel, person, concern, search } = input;
  return and(
    undecided,
    state && eq(cases.state, state),
    zone && eq(cases.zone, zone),
    channel && eq(transactions.channel, channel),
    person ? heldBy(person) : undefined,
    concern && (await isOfConcern(ctx, concern, now)),
    search ? matches(search) : undefined,
  );
}

function heldBy(person: string): SQL | undefined {
  if (person === "nobody") return and(isNull(cases.assignedTo), isNull(cases.claimedBy));
  return or(eq(cases.assignedTo, person), eq(cases.claimedBy, person));
}

async function isOfConcern(ctx: Context, concern: "overdue" | "expiring", now: Date): Promise<SQL> {
  if (concern === "overdue") return lt(cases.dueAt, now);
  const { terms } = await policyInForce(ctx.db, now);
  return isExpiringHold(new Date(now.getTime() + terms.expiringMinutes * 60_000));
}

function matches(search: string): SQL | undefined {
  const start = `${search.replace(/[\\%_]/g, "\\$&")}%`;
  return or(
    /^\d{1,15}$/.test(search) ? eq(cases.number, Number(search)) : undefined,
    like(transactions.externalId, start),
    like(transactions.accountId, start),
  );
}

function itemOf({ row, transaction, assignee, holder }: Row, now: Date): FloorCase {
  const isHeld = transaction.paymentState === "held";
  return {
    caseId: row.id,
    number: row.number,
    externalId: transaction.externalId,
    accountId: transaction.accountId,
    amount: formatAmount(transaction.amountMinor, transaction.currency),
    currency: transaction.currency,
    channel: transaction.channel,
    zone: row.zone,
    kind: row.kind,
    // The list holds undecided cases only.
    state: row.state as FloorCase["state"],
    openedAt: row.openedAt.toISOString(),
    dueAt: row.dueAt.toISOString(),
    overdue: row.dueAt < now,
    holdExpiresAt: isHeld ? (transaction.holdExpiresAt?.toISOString() ?? null) : null,
    assignedTo: personRef(row.assignedTo, assignee),
    claimedBy: personRef(row.claimedBy, holder),
  };
}

const personRef = (id: string | null, name: string | null) =>
  id !== null && name !== null ? { id, name } : null;
