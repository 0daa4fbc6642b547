import "server-only";
import type { Database } from "@/db/client";
import { policyInForce } from "../policy/read";
import { shiftWeek, weekInterval } from "./iso-week";
import { type LargestCase, listLargestCases, listTypologies, type TypologyFigures } from "./largest";
import { type Maturity, maturityOf } from "./maturity";
import { type WeekTotals, weekTotals } from "./totals";
import { type By, readWeekSums } from "./week-sums";
import { readWorkload, type Workload } from "./workload";

const LARGEST_SHOWN = 3;

export type WeekQuestion = { week: string; by: By; timeZone: string; now: Date };

export type WeekFigures = {
  week: string;
  by: By;
  timeZone: string;
  start: Date;
  /** First instant that no longer belongs to the week. */
  end: Date;
  maturity: Maturity;
  totals: WeekTotals;
  /** The week before, as it was known at the same age. */
  previous: { week: string; totals: WeekTotals };
  workload: Workload;
  largest: LargestCase[];
  typologies: TypologyFigures[];
};

/**
 * Every figure of one ISO week; the page, the API and the e-mail all take theirs from here.
 * @throws RangeError for a week that does not exist
 */
export async function weekFigures(db: Database, question: WeekQuestion): Promise<WeekFigures> {
  const { week, by, timeZone, now } = question;
  const interval = weekInterval(week, timeZone);
  const span = { ...interval, by, knownAt: now };
  const previousWeek = shiftWeek(week, -1);
  const previousInterval = weekInterval(previousWeek, timeZone);
  const ageMs = now.getTime() - interval.end.getTime();
  const previousKnownAt = new Date(previousInterval.end.getTime() + ageMs);
  const { terms } = await policyInForce(db, now);
  const [sums, previousSums, workload, largest, typologies] = await Promise.all([
    readWeekSums(db, span),
    readWeekSums(db, { ...previousInterval, by, knownAt: previousKnownAt }),
    readWorkload(db, interval, now),
    listLargestCases(db, span, LARGEST_SHOWN),
    listTypologies(db, span),
  ]);
  return {
    week,
    by,
    timeZone,
    ...interval,
    maturity: maturityOf({ by, end: interval.end, now, days: terms.maturityDays }),
    totals: weekTotals(sums),
    previous: { week: previousWeek, totals: weekTotals(previousSums) },
    workload,
    largest,
    typologies,
  };
}
