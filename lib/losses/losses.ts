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
  return shiftWeek(await runningWeek(ctx), -1);
}

export type WeeksAround = { previous: string; next: string | null; running: string };

/** Neighbours of a week for the way back and forth; nothing is known of weeks that have not begun. */
export async function weeksAround(ctx: Context, week: string): Promise<WeeksAround> {
  const running = await runningWeek(ctx);
  // Labels of equal length: the later week is the greater text.
  return { previous: shiftWeek(week, -1), next: week < running ? shiftWeek(week, 1) : null, running };
}

async function runningWeek(ctx: Context): Promise<string> {
  return weekOf(ctx.now(), await readReportingZone(ctx.db));
}
