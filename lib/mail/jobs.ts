import "server-only";
import type { Job } from "../job";
import { sendDueMail } from "./send-due";
import { mailSettings } from "./settings";

/** The rows' locks share the messages out between servers. */
export const mailJobs: readonly Job[] = [
  {
    name: "outbox",
    everyMs: 2_000,
    slot: null,
    run: async (ctx, signal) => {
      await sendDueMail(ctx, mailSettings(), signal);
    },
  },
];
