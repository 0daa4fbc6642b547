import { TZDate } from "@date-fns/tz";
import { addDays, format } from "date-fns";
import { dayEnd, dayStart } from "../trail/day-range";

/** As the address has it: each end a day of the person's calendar, or an instant. */
export type WindowFields = { from: string | null; to: string | null };

/** What the API is asked for; an end that cannot be read is left open and named. */
export type AskedWindow = { from?: string; to?: string; unreadable: readonly ("from" | "to")[] };

const INSTANT = /^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d(\.\d+)?Z$/;

export function windowOf({ from, to }: WindowFields, timeZone: string): AskedWindow {
  const start = from ? instantOf(from, dayStart(from, timeZone)) : null;
  const end = to ? instantOf(to, dayEnd(to, timeZone)) : null;
  const unreadable: ("from" | "to")[] = [];
  if (from && start === null) unreadable.push("from");
  if (to && end === null) unreadable.push("to");
  return { ...(start && { from: start }), ...(end && { to: end }), unreadable };
}

function instantOf(text: string, day: Date | null): string | null {
  if (day) return day.toISOString();
  return INSTANT.test(text) && !Number.isNaN(Date.parse(text)) ? text : null;
}

/** The day so many days before the one on which `nowMs` falls, as the address has it. */
export function dayBefore(nowMs: number, days: number, timeZone: string): string {
  return format(addDays(new TZDate(nowMs, timeZone), -days), "yyyy-MM-dd");
}

/** A day to start a date field from: instants become the day they fall on. */
export function dayOf(text: string | null, timeZone: string): string {
  if (!text) return "";
  return INSTANT.test(text) ? format(new TZDate(text, timeZone), "yyyy-MM-dd") : text;
}
