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

/** A Sunday evening too leaves time to make up for it. */
const SHORTEST_WINDOW_MS = 24 * 60 * 60 * 1000;

/**
 * The ISO week whose summary a person is to have by now, or null. It is the week before the one that runs where the
 * person is, on the morning they chose, and never before that week is over in the reporting zone. A morning on which
 * no server ran is made up for until the week is out, and for a day at least.
 */
export function summaryDue(morning: Morning, now: Date, reportingZone: string): string | null {
  const running = weekOf(now, morning.timeZone);
  const isDue = (dueAt: number) => now.getTime() >= dueAt && morning.subscribedAt.getTime() <= dueAt;
  if (isDue(dueIn(running, morning, reportingZone))) return shiftWeek(running, -1);
  const before = shiftWeek(running, -1);
  const dueBefore = dueIn(before, morning, reportingZone);
  const isOpen = now.getTime() < dueBefore + SHORTEST_WINDOW_MS;
  return isOpen && isDue(dueBefore) ? shiftWeek(before, -1) : null;
}

/** The moment in a week at which the summary of the week before falls due. */
function dueIn(running: string, { timeZone, weekday, hour }: Morning, reportingZone: string): number {
  const monday = new TZDate(weekInterval(running, timeZone).start.getTime(), timeZone);
  const chosen = setHours(addDays(monday, weekday - 1, { in: tz(timeZone) }), hour);
  const isOver = weekInterval(shiftWeek(running, -1), reportingZone).end;
  return Math.max(chosen.getTime(), isOver.getTime());
}
