import { TZDate, tz } from "@date-fns/tz";
import { addDays, setHours } from "date-fns";
import { shiftWeek, weekInterval, weekOf } from "./iso-week";

export type Morning = {
  /** ISO weekday, 1 = Monday, and hour on the person's own wall clock. */
  weekday: number;
  hour: number;
  timeZone: string;
  /** Mornings before it are not made up for. */
  subscribedAt: Date;
};

/**
 * The ISO week whose summary a person is to have by now, or null. It is the week before the one that runs where the
 * person is, on the morning they chose, and never before that week is over in the reporting zone. A morning on which
 * no server ran is made up for until the week is out.
 */
export function summaryDue(morning: Morning, now: Date, reportingZone: string): string | null {
  const { timeZone, weekday, hour, subscribedAt } = morning;
  const running = weekOf(now, timeZone);
  const monday = new TZDate(weekInterval(running, timeZone).start.getTime(), timeZone);
  const chosen = setHours(addDays(monday, weekday - 1, { in: tz(timeZone) }), hour);
  const week = shiftWeek(running, -1);
  const isOver = weekInterval(week, reportingZone).end;
  const dueAt = Math.max(chosen.getTime(), isOver.getTime());
  return now.getTime() >= dueAt && subscribedAt.getTime() <= dueAt ? week : null;
}
