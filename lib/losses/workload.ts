import "server-only";
import { and, eq, gte, inArray, lt, or } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { cases } from "@/db/schema/cases";
import { UNDECIDED_STATES } from "../cases/codes";
import type { WeekInterval } from "./iso-week";
import { count } from "./sum";

export type Workload = {
  opened: number;
  decided: number;
  /** Undecided at the week's end, or now while the week runs, and those of them past their deadline. */
  waiting: number;
  overdue: number;
  /** Closed unlabelled in the week because nobody reached them in their lifetime. */
  lapsed: number;
};

/** What the team had to do in the week and what was left of it. */
export async function readWorkload(db: Executor, { start, end }: WeekInterval, now: Date): Promise<Workload> {
  const asOf = end < now ? end : now;
  const within = (column: typeof cases.openedAt | typeof cases.decidedAt | typeof cases.changedAt) =>
    and(gte(column, start), lt(column, end));
  // A lapsed case never changes again: its last change is when it closed, which may be later than planned.
  const isLapsed = eq(cases.state, "lapsed");
  const undecided = and(
    lt(cases.openedAt, asOf),
    // A case decided or lapsed since was still waiting then.
    or(
      inArray(cases.state, [...UNDECIDED_STATES]),
      gte(cases.decidedAt, asOf),
      and(isLapsed, gte(cases.changedAt, asOf)),
    ),
  );
  const [opened, decided, lapsed, waiting] = await Promise.all([
    db.select({ n: count() }).from(cases).where(within(cases.openedAt)),
    db.select({ n: count() }).from(cases).where(within(cases.decidedAt)),
    db
      .select({ n: count() })
      .from(cases)
      .where(and(isLapsed, within(cases.changedAt))),
    db
      .select({ n: count(), overdue: count(lt(cases.dueAt, asOf)) })
      .from(cases)
      .where(undecided),
  ]);
  return {
    opened: opened[0]?.n ?? 0,
    decided: decided[0]?.n ?? 0,
    waiting: waiting[0]?.n ?? 0,
    overdue: waiting[0]?.overdue ?? 0,
    lapsed: lapsed[0]?.n ?? 0,
  };
}
