import "server-only";
import { type Job, slotOfMinutes } from "../job";
import { mailSettings } from "../mail/settings";
import { askForSecondPerson } from "./ask-for-approval";

export const approvalJobs: readonly Job[] = [
  {
    name: "approvals.mail",
    everyMs: 60_000,
    slot: slotOfMinutes(1),
    run: (ctx) => askForSecondPerson(ctx, { appUrl: mailSettings().appUrl }),
  },
];
