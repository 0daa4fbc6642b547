import "server-only";
import { weeklySummaryMail } from "@/emails/weekly-summary";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { mailSettings } from "../mail/settings";
import { lastCompleteWeek, readLosses } from "./losses";
import type { SummaryContentView, WeekInput } from "./summary-schema";

/** The summary of a week as it would go out now; nothing is queued. */
export async function previewSummary(ctx: Context, input: WeekInput): Promise<SummaryContentView> {
  demand(ctx, "losses.read");
  const week = input.week ?? (await lastCompleteWeek(ctx));
  const view = await readLosses(ctx, { week, by: "transaction" });
  return weeklySummaryMail({ view, appUrl: mailSettings().appUrl, unsubscribeUrl: null });
}
