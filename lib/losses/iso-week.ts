import { TZDate, tz } from "@date-fns/tz";
import { addWeeks, getISOWeek, getISOWeeksInYear, getISOWeekYear, startOfISOWeek } from "date-fns";

/** Half-open: from Monday 00:00 to the next Monday 00:00 on the wall clock of the time zone. */
export type WeekInterval = { start: Date; end: Date };

type YearAndWeek = { year: number; number: number };

/** "2026-W53" → its week-year and number (ISO 8601); null where that year has no such week or the text is none. */
function parseWeek(week: string): YearAndWeek | null {
  const match = /^(\d{4})-W(\d{2})$/.exec(week);
  if (!match) return null;
  const year = Number(match[1]);
  const number = Number(match[2]);
  // 4 January lies in week 1 by definition, so it names the week-year. Date takes years below 100 as 19xx.
  const exists = year >= 1900 && number >= 1 && number <= getISOWeeksInYear(new Date(year, 0, 4));
  return exists ? { year, number } : null;
}

export const isWeek = (week: string): boolean => parseWeek(week) !== null;

/** The ISO week in which an instant lies in the time zone, labelled with its week-year: "2026-W01". */
export function weekOf(instant: Date, timeZone: string): string {
  const local = new TZDate(instant.getTime(), timeZone);
  return label(getISOWeekYear(local), getISOWeek(local));
}

/**
 * The instants between which a week runs in the time zone; 167 or 169 hours where the clocks change in it.
 * @throws RangeError for a week that does not exist
 */
export function weekInterval(week: string, timeZone: string): WeekInterval {
  const parsed = parseWeek(week);
  if (!parsed) throw new RangeError("There is no such ISO week");
  const first = startOfISOWeek(new TZDate(parsed.year, 0, 4, timeZone), { in: tz(timeZone) });
  const start = addWeeks(first, parsed.number - 1);
  return { start: new Date(start.getTime()), end: new Date(addWeeks(start, 1).getTime()) };
}

/** The week so many weeks later, or earlier where negative. @throws RangeError for a week that does not exist */
export function shiftWeek(week: string, by: number): string {
  const parsed = parseWeek(week);
  if (!parsed) throw new RangeError("There is no such ISO week");
  const shifted = addWeeks(new TZDate(parsed.year, 0, 4, "UTC"), parsed.number - 1 + by);
  return label(getISOWeekYear(shifted), getISOWeek(shifted));
}

const label = (year: number, week: number) =>
  `${String(year).padStart(4, "0")}-W${String(week).padStart(2, "0")}`;
