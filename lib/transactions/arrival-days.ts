import "server-only";
import { between, sql } from "drizzle-orm";
import type { Executor, Tx } from "@/db/client";
import { arrivalDays } from "@/db/schema/transactions";
import type { ArrivalDay } from "./sample";

const DAYS_BACK = 7;
const DAY_MS = 86_400_000;

export const dayOf = (moment: Date): string => moment.toISOString().slice(0, 10);

/** Counts of the days that the payments fall on and of the week before the first of them. */
export async function listArrivalDays(db: Executor, moments: readonly Date[]): Promise<ArrivalDay[]> {
  const times = moments.map((moment) => moment.getTime());
  const [first, last] = [times.reduce((a, b) => Math.min(a, b)), times.reduce((a, b) => Math.max(a, b))];
  const from = dayOf(new Date(first - DAYS_BACK * DAY_MS));
  return db
    .select()
    .from(arrivalDays)
    .where(between(arrivalDays.day, from, dayOf(new Date(last))));
}

/** Adds a batch to the days it falls on. Rows are locked in the order of days, and until the transaction ends. */
export async function countArrivals(
  tx: Tx,
  arrivals: readonly { occurredAt: Date; passed: boolean }[],
): Promise<void> {
  const byDay = new Map<string, ArrivalDay>();
  for (const { occurredAt, passed } of arrivals) {
    const day = dayOf(occurredAt);
    const counted = byDay.get(day) ?? { day, received: 0, passed: 0 };
    counted.received += 1;
    if (passed) counted.passed += 1;
    byDay.set(day, counted);
  }
  const rows = [...byDay.values()].sort((a, b) => (a.day < b.day ? -1 : 1));
  if (rows.length === 0) return;
  await tx
    .insert(arrivalDays)
    .values(rows)
    .onDuplicateKeyUpdate({
      set: {
        received: sql`${arrivalDays.received} + values(${arrivalDays.received})`,
        passed: sql`${arrivalDays.passed} + values(${arrivalDays.passed})`,
      },
    });
}
