import "server-only";
import { and, between, eq, gte, inArray, lt, sum } from "drizzle-orm";
import type { Executor } from "@/db/client";
import { cases, decisions } from "@/db/schema/cases";
import { outcomes } from "@/db/schema/outcomes";
import { arrivalDays, scores, transactions } from "@/db/schema/transactions";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { invalid } from "../errors";
import { minorDigits } from "../money";
import { readBaseCurrency } from "../transactions/base-currency";
import { type DrawnPayment, estimatePassed } from "./passed-rules";
import type { PassedInput, PassedView } from "./passed-schema";

const DAY_MS = 86_400_000;
const USUAL_DAYS = 28;
/** A year and a day: what an installation keeps at hand. */
const MOST_DAYS = 366;

type Days = { from: string; to: string; start: Date; end: Date };

/** Fraud among the payments below the review threshold, estimated from the random sample of them. */
export async function showPassed(ctx: Context, input: PassedInput = {}): Promise<PassedView> {
  demand(ctx, "scorer.read");
  const { db } = ctx;
  const days = daysOf(input, ctx.now());
  const [passed, draws, reported, code] = await Promise.all([
    countPassed(db, days),
    listDrawn(db, days),
    sumReported(db, days),
    readBaseCurrency(db),
  ]);
  return {
    from: days.from,
    to: days.to,
    ...estimatePassed(draws, passed),
    reported,
    baseCurrency: { code, minorDigits: minorDigits(code) ?? 2 },
  };
}

function daysOf(input: PassedInput, now: Date): Days {
  const to = input.to ?? (input.from ? laterDay(input.from, USUAL_DAYS - 1, now) : dayText(now));
  const from = input.from ?? dayText(new Date(Date.parse(to) - (USUAL_DAYS - 1) * DAY_MS));
  const start = new Date(from);
  const end = new Date(Date.parse(to) + DAY_MS);
  if (end.getTime() - start.getTime() > MOST_DAYS * DAY_MS) {
    throw invalid([{ path: "from", message: `must be at most ${MOST_DAYS} days before to` }]);
  }
  return { from, to, start, end };
}

const dayText = (moment: Date): string => moment.toISOString().slice(0, 10);

/** So many days later, or today where that comes first; never before the day itself. */
function laterDay(day: string, days: number, now: Date): string {
  const later = dayText(new Date(Date.parse(day) + days * DAY_MS));
  const today = dayText(now);
  return later < today ? later : today < day ? day : today;
}

async function countPassed(db: Executor, { from, to }: Days): Promise<number> {
  const [row] = await db
    .select({ passed: sum(arrivalDays.passed) })
    .from(arrivalDays)
    .where(between(arrivalDays.day, from, to));
  return Number(row?.passed ?? 0);
}

async function listDrawn(db: Executor, { start, end }: Days): Promise<DrawnPayment[]> {
  const rows = await db
    .select({
      probability: cases.sampleProbability,
      state: cases.state,
      verdict: decisions.verdict,
      amountBaseMinor: transactions.amountBaseMinor,
    })
    .from(cases)
    .innerJoin(transactions, eq(transactions.id, cases.transactionId))
    .leftJoin(decisions, eq(decisions.standsForCaseId, cases.id))
    .where(
      and(
        eq(cases.kind, "sample"),
        // A case is opened when its payment comes in, which a clock running ahead puts a little before it happened.
        gte(cases.openedAt, new Date(start.getTime() - DAY_MS)),
        gte(transactions.occurredAt, start),
        lt(transactions.occurredAt, end),
      ),
    );
  return rows.map(({ probability, state, verdict, amountBaseMinor }) => ({
    probability: probability as number,
    verdict: verdict === null ? null : verdict === "fraudulent" ? "fraudulent" : "other",
    isLapsed: state === "lapsed",
    amountBaseMinor,
  }));
}

/** Payments that passed and whose label in force is fraud by what others reported. */
async function sumReported(db: Executor, { start, end }: Days): Promise<PassedView["reported"]> {
  const rows = await db
    .selectDistinct({ id: transactions.id, amountBaseMinor: transactions.amountBaseMinor })
    .from(outcomes)
    .innerJoin(transactions, eq(transactions.id, outcomes.transactionId))
    .innerJoin(
      scores,
      and(eq(scores.transactionId, transactions.id), eq(scores.kind, "arrival"), eq(scores.zone, "pass")),
    )
    .where(
      and(
        inArray(outcomes.kind, ["chargeback", "customer_report"]),
        eq(transactions.label, 1),
        gte(transactions.occurredAt, start),
        lt(transactions.occurredAt, end),
      ),
    );
  return {
    fraudulent: rows.length,
    valueMinor: rows.reduce((total, { amountBaseMinor }) => total + (amountBaseMinor ?? 0), 0),
  };
}
