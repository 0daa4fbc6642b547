import { inArray, sql } from "drizzle-orm";
import { assignCase } from "@/lib/cases/assign";
import { UNDECIDED_STATES } from "@/lib/cases/codes";
import { caseJobs } from "@/lib/cases/jobs";
import type { Context, PersonActor } from "@/lib/context";
import { createCandidate } from "@/lib/learning/create-candidate";
import { receiveOutcomes } from "@/lib/outcomes/receive";
import { approvePolicy } from "@/lib/policy/approve";
import { proposePolicy } from "@/lib/policy/propose";
import { policyInForce } from "@/lib/policy/read";
import type { PolicyTerms } from "@/lib/policy/schema";
import { receiveTransactions } from "@/lib/transactions/receive";
import { cases, decisions } from "../schema/cases";
import { summaryRecipients } from "../schema/mail";
import type { DemoTransaction, Truth } from "./payment";
import { Chance } from "./random";
import { DEMO_DAYS, scenarioDays } from "./scenario";
import { correctMistake, type Mistake, MOST_SECONDS_A_CASE, workShift } from "./shift";
import { type Clock, clockFrom, contextAt, type Team } from "./team";

const HOUR_MS = 3_600_000;
const SOURCE = "core-banking";
/** Hours of the day at which the payments since the last one have come in. */
const DELIVERIES = [6, 10, 14, 18, 24];
const CASES_A_SHIFT = 3;
const LONGEST_SHIFT_MS = CASES_A_SHIFT * MOST_SECONDS_A_CASE * 1_000;
/** Two of the reviewers are away in the end, so that whoever looks around finds work waiting. */
const SHORT_DAYS = 3;
const CHARGEBACK_AFTER_DAYS = 11;
/** By the day of the scenario: proposed by a supervisor, approved by the risk manager. */
const POLICY_CHANGES: Record<number, { reason: string; terms: Partial<PolicyTerms> }> = {
  0: {
    reason: "The first team is small: three reviewers can look at about twenty-five cases a day.",
    terms: { reviewThreshold: { kind: "capacity", casesPerDay: 24 }, dailyCapacity: 28 },
  },
  12: {
    reason: "A reviewer is back from training; the team can look at more.",
    terms: { reviewThreshold: { kind: "capacity", casesPerDay: 30 }, dailyCapacity: 34 },
  },
};

/** Begun on a day of the scenario by a supervisor; they catch up once the server runs. */
const CANDIDATES_ON_DAY = 9;
const CANDIDATES = [
  { name: "Six rules together", method: "aggregate", options: {} },
  { name: "Without holding back", method: "implicit", options: { regularization: 0.1 } },
] as const;

type Counts = { payments: number; decided: number; waiting: number };

/** Lives the scenario up to `now` through the product's own use cases, on a clock of its own. */
export async function liveMonth(
  ctx: Context,
  team: Team,
  seed: number,
  lastDay: Date,
  now: Date,
): Promise<Counts> {
  const chance = new Chance(seed + 1);
  const clock = clockFrom(ctx.now());
  const truths = new Map<string, Truth>();
  const mistakes: Mistake[] = [];
  const past: DemoTransaction[][] = [];
  const truthOf = (externalId: string) => truths.get(externalId) as Truth;
  const [supervisor] = team.supervisor as [PersonActor];
  await subscribe(ctx, team);
  for (const { day, dayNumber, transactions } of scenarioDays(seed, lastDay)) {
    const happened = transactions.filter(({ at }) => at <= now);
    for (const { item, truth } of happened) truths.set(item.externalId as string, truth);
    past.push(happened);
    const change = POLICY_CHANGES[dayNumber];
    if (change) await changePolicy(ctx, clock, team, change);
    if (dayNumber === CANDIDATES_ON_DAY) {
      for (const candidate of CANDIDATES) await createCandidate(contextAt(ctx, supervisor, clock), candidate);
    }
    await chargeBack(ctx, clock, past[dayNumber - CHARGEBACK_AFTER_DAYS] ?? []);
    let from = day;
    for (const hour of DELIVERIES) {
      const until = new Date(Math.min(day.getTime() + hour * HOUR_MS, now.getTime()));
      clock.set(until);
      await deliver(ctx, clock, happened, from, until);
      from = until;
      // No shift that might last past `now`: nobody has yet decided in the future, and undo goes by the newest decision.
      if (hour >= 24 || until.getTime() + LONGEST_SHIFT_MS > now.getTime()) continue;
      const isShort = hour < 10 || dayNumber >= DEMO_DAYS - SHORT_DAYS;
      for (const reviewer of isShort ? team.reviewer.slice(0, 1) : team.reviewer) {
        mistakes.push(...(await workShift(ctx, clock, chance, reviewer, CASES_A_SHIFT, truthOf)));
      }
    }
    await tidyUp(contextAt(ctx, { kind: "system", job: "demo" }, clock));
    if (dayNumber % 5 === 4) {
      for (const mistake of mistakes.splice(0, 3)) await correctMistake(ctx, clock, supervisor, mistake);
    }
  }
  clock.set(now);
  await handOut(ctx, clock, team);
  return countAll(ctx, truths.size);
}

async function deliver(
  ctx: Context,
  clock: Clock,
  day: DemoTransaction[],
  from: Date,
  until: Date,
): Promise<void> {
  const items = day.filter(({ at }) => at > from && at <= until).map(({ item }) => item);
  if (items.length === 0) return;
  const results = await receiveTransactions(contextAt(ctx, { kind: "system", job: "demo" }, clock), {
    source: SOURCE,
    items,
  });
  const rejected = results.find((result) => result.status !== "created");
  if (rejected) throw new Error(`The demo's payment ${rejected.externalId} was ${rejected.status}`);
}

/** Customers dispute what they did not pay; the dispute arrives days later, whatever was decided. */
async function chargeBack(ctx: Context, clock: Clock, day: DemoTransaction[]): Promise<void> {
  const outcomes = day
    .filter(({ truth }) => truth.verdict === "fraudulent")
    .map(({ item }) => ({
      externalId: item.externalId as string,
      kind: String(item.channel).includes("transfer")
        ? ("customer_report" as const)
        : ("chargeback" as const),
      reasonFamily: "fraud" as const,
      stage: "opened" as const,
      occurredAt: clock.now().toISOString(),
    }));
  if (outcomes.length > 0) {
    await receiveOutcomes(contextAt(ctx, { kind: "system", job: "demo" }, clock), { outcomes });
  }
}

async function changePolicy(
  ctx: Context,
  clock: Clock,
  team: Team,
  { reason, terms }: { reason: string; terms: Partial<PolicyTerms> },
): Promise<void> {
  const [supervisor] = team.supervisor as [PersonActor];
  const [riskManager] = team.risk_manager as [PersonActor];
  const inForce = await policyInForce(ctx.db, clock.now());
  const proposal = await proposePolicy(contextAt(ctx, supervisor, clock), {
    basedOnVersion: inForce.version,
    reason,
    terms: { ...inForce.terms, ...terms },
  });
  await approvePolicy(contextAt(ctx, riskManager, clock), { id: proposal.policyId, effectiveAt: null });
}

async function tidyUp(ctx: Context): Promise<void> {
  const { signal } = new AbortController();
  for (const job of caseJobs) await job.run(ctx, signal);
}

/** So that the floor has something to show: a few cases are in somebody's name. */
async function handOut(ctx: Context, clock: Clock, team: Team): Promise<void> {
  const [supervisor] = team.supervisor as [PersonActor];
  const rows = await ctx.db
    .select({ id: cases.id })
    .from(cases)
    .where(inArray(cases.state, ["open"]))
    .limit(9);
  for (const [index, { id }] of rows.entries()) {
    const reviewer = team.reviewer[index % team.reviewer.length] as PersonActor;
    await assignCase(contextAt(ctx, supervisor, clock), { id, personId: reviewer.personId });
  }
}

async function subscribe(ctx: Context, team: Team): Promise<void> {
  const readers = [...team.risk_manager, ...team.supervisor.slice(0, 1)];
  await ctx.db.insert(summaryRecipients).values(
    readers.map(({ personId }) => ({
      personId,
      weekday: 1,
      hour: 7,
      subscribedAt: ctx.now(),
      changedAt: ctx.now(),
    })),
  );
}

async function countAll(ctx: Context, payments: number): Promise<Counts> {
  const [decided] = await ctx.db.select({ count: sql`count(*)`.mapWith(Number) }).from(decisions);
  const [waiting] = await ctx.db
    .select({ count: sql`count(*)`.mapWith(Number) })
    .from(cases)
    .where(inArray(cases.state, [...UNDECIDED_STATES]));
  return { payments, decided: decided?.count ?? 0, waiting: waiting?.count ?? 0 };
}
