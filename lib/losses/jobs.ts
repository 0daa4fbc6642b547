import "server-only";
import { type Job, slotOfMinutes } from "../job";
import { mailSettings } from "../mail/settings";
import { sendDueSummaries } from "./send-summary";

export const lossJobs: readonly Job[] = [
  {
    name: "weekly-summaries",
    everyMs: 60_000,
    // Every clock in use is a whole number of quarters of an hour from UTC, so a full hour anywhere begins a slot.
    slot: slotOfMinutes(15),
    run: async (ctx, signal) => {
      await sendDueSummaries(ctx, { appUrl: mailSettings().appUrl, signal });
    },
  },
];
