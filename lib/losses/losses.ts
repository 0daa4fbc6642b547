import "server-only";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { readWeekView } from "./compose-summary";
import { shiftWeek, weekOf } from "./iso-week";
import { readReportingZone } from "./reporting-zone";
import type { LossesInput, WeekView } from "./schema";

/** A week's figures; of the last complete week where none is named. */
export async function readLosses(ctx: Context, input: LossesInput): Promise<WeekView> {
  demand(ctx, "losses.read");
  const week = input.week ?? (await lastCompleteWeek(ctx));
  return readWeekView(ctx.db, { week, by: input.by, now: ctx.now() });
}

export async function lastCompleteWeek(ctx: Context): Promise<string> {
  return shiftWeek(weekOf(ctx.now(), await readReportingZone(ctx.db)), -1);
}
