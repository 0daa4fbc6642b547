import "server-only";
import { TZDate } from "@date-fns/tz";
import { startOfDay } from "date-fns";
import { and, count, eq, gte, inArray, isNotNull, isNull, lte, min, or, type SQL, sql } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { cases, decisions } from "@/db/schema/cases";
import { people, personRoles } from "@/db/schema/people";
import { transactions } from "@/db/schema/transactions";
import { UNDECIDED_STATES } from "../cases/codes";
import { policyInForce } from "../policy/read";
import { addUp, personRows } from "./rules";
import type { FloorView } from "./schema";

/** Holds that end within the policy's last minutes. */
export const isExpiringHold = (soon: Date): SQL<boolean> =>
  sql`(${transactions.paymentState} = 'held' and ${transactions.holdExpiresAt} <= ${soon})`;

export const undecided = inArray(cases.state, [...UNDECIDED_STATES]);

/** What waits and where, who holds what, and today's pace. The day begins at midnight in `timeZone`. */
export async function floorView(db: Executor, now: Date, timeZone = "UTC"): Promise<FloorView> {
  const { terms } = await policyInForce(db, now);
  const soon = new Date(now.getTime() + terms.expiringMinutes * 60_000);
  const midnight = new Date(startOfDay(new TZDate(now, timeZone)).getTime());
  const [groups, hands, decided, team] = await Promise.all([
    countGroups(db, now, soon),
    countHands(db, now),
    countDecided(db, midnight, now),
    listDeciders(db),
  ]);
  return {
    at: now.toISOString(),
    ...addUp(groups),
    expiringMinutes: terms.expiringMinutes,
    people: personRows(team, hands, decided),
    decidedToday: decided.reduce((sum, person) => sum + person.count, 0),
    dailyCapacity: terms.dailyCapacity,
  };
}

const overdueAt = (now: Date) => sql<number>`cast(sum(${cases.dueAt} < ${now}) as signed)`;

function countGroups(db: Executor, now: Date, soon: Date) {
  return db
    .select({
      zone: cases.zone,
      channel: transactions.channel,
      state: cases.state,
      total: count(),
      overdue: overdueAt(now),
      expiringHolds: sql<number>`cast(coalesce(sum(${isExpiringHold(soon)}), 0) as signed)`,
      oldestOpenedAt: min(cases.openedAt),
    })
    .from(cases)
    .innerJoin(transactions, eq(transactions.id, cases.transactionId))
    .where(undecided)
    .groupBy(cases.zone, transactions.channel, cases.state);
}

function countHands(db: Executor, now: Date) {
  return db
    .select({
      claimedBy: cases.claimedBy,
      assignedTo: cases.assignedTo,
      total: count(),
      overdue: overdueAt(now),
    })
    .from(cases)
    .where(and(undecided, or(isNotNull(cases.claimedBy), isNotNull(cases.assignedTo))))
    .groupBy(cases.claimedBy, cases.assignedTo);
}

function countDecided(db: Executor, since: Date, now: Date) {
  return db
    .select({ personId: decisions.personId, count: count() })
    .from(decisions)
    .where(
      and(
        eq(decisions.kind, "decision"),
        gte(decisions.decidedAt, since),
        lte(decisions.decidedAt, now),
        isNull(decisions.undoneAt),
      ),
    )
    .groupBy(decisions.personId);
}

/** Everybody who decides cases now, and who once did and may still hold some. */
async function listDeciders(db: Executor): Promise<{ id: string; name: string; decides: boolean }[]> {
  const decides = and(
    eq(personRoles.personId, people.id),
    inArray(personRoles.role, ["reviewer", "supervisor"]),
    eq(people.state, "active"),
  );
  const rows = await db
    .select({ id: people.id, name: people.name, roles: count(personRoles.role) })
    .from(people)
    .leftJoin(personRoles, decides)
    .groupBy(people.id, people.name)
    .orderBy(people.name, people.id);
  return rows.map(({ id, name, roles }) => ({ id, name, decides: roles > 0 }));
}
