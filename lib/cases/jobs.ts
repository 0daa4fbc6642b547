import "server-only";
import { type Job, slotOfMinutes } from "../job";
import { mailSettings } from "../mail/settings";
import { bringBackDueCases } from "./bring-back";
import { expireHolds } from "./expire-holds";
import { freeStrandedCases } from "./free-stranded";
import { lapseUnreachedCases } from "./lapse";
import { mailAssigned } from "./mail-assigned";
import { refreshLinkedCases } from "./refresh";
import { rescoreWaitingCases } from "./rescore-waiting";

const SECOND_MS = 1_000;

/** Those without slots lock the rows they work on, and do nothing to those that another server saw to. */
export const caseJobs: readonly Job[] = [
  { name: "cases.bring-back", everyMs: 5 * SECOND_MS, slot: null, run: bringBackDueCases },
  { name: "cases.expire-holds", everyMs: 10 * SECOND_MS, slot: null, run: expireHolds },
  { name: "cases.lapse", everyMs: 60 * SECOND_MS, slot: null, run: lapseUnreachedCases },
  { name: "cases.free-stranded", everyMs: 60 * SECOND_MS, slot: null, run: freeStrandedCases },
  // People expect linked cases to rise at once.
  { name: "cases.refresh-linked", everyMs: 0.3 * SECOND_MS, slot: null, run: refreshLinkedCases },
  // Each pass looks for cases of an earlier set of signals, so that two servers at it do no harm.
  { name: "cases.rescore-waiting", everyMs: 2 * SECOND_MS, slot: null, run: rescoreWaitingCases },
  {
    // Seldom enough that what a supervisor hands out in one go comes in one message.
    name: "cases.assigned-mail",
    everyMs: 30 * SECOND_MS,
    slot: slotOfMinutes(2),
    run: (ctx) => mailAssigned(ctx, { appUrl: mailSettings().appUrl }),
  },
];
