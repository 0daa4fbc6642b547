import { TZDate } from "@date-fns/tz";
import { addDays, addHours, set } from "date-fns";

export type WaitTime = { name: string; until: Date };

const MORNING = { hours: 9, minutes: 0, seconds: 0, milliseconds: 0 };

/** Times a case is usually set aside until, in the person's own zone. */
export function waitTimes(now: Date, zone: string): WaitTime[] {
  const here = new TZDate(now, zone);
  return [
    { name: "1 hour", until: addHours(now, 1) },
    { name: "4 hours", until: addHours(now, 4) },
    { name: "Tomorrow, 09:00", until: new Date(set(addDays(here, 1), MORNING).getTime()) },
    { name: "In 3 days, 09:00", until: new Date(set(addDays(here, 3), MORNING).getTime()) },
  ];
}
