import { TZDate } from "@date-fns/tz";
import { addDays } from "date-fns";

const DAY = /^(\d{4})-(\d{2})-(\d{2})$/;

/** The first moment of a day of the person's calendar; null where it is no day. */
export function dayStart(day: string | undefined, timeZone: string): Date | null {
  const parts = DAY.exec(day ?? "");
  if (!parts) return null;
  const [year, month, date] = parts.slice(1).map(Number) as [number, number, number];
  const start = new TZDate(year, month - 1, date, timeZone);
  const isThatDay = start.getMonth() === month - 1 && start.getDate() === date;
  return isThatDay ? new Date(start.getTime()) : null;
}

/** The first moment after a day: days have 23 to 25 hours. */
export function dayEnd(day: string | undefined, timeZone: string): Date | null {
  const start = dayStart(day, timeZone);
  return start && new Date(addDays(new TZDate(start, timeZone), 1).getTime());
}
