import "server-only";
import type { Job } from "../job";
import { bringBackDueCases } from "./bring-back";
import { expireHolds } from "./expire-holds";
import { freeStrandedCases } from "./free-stranded";
import { lapseUnreachedCases } from "./lapse";
import { refreshLinkedCases } from "./refresh";

const SECOND_MS = 1_000;

/** Every one of them locks the rows it works on, and does nothing to those that another server saw to: no slots are needed. */
export const caseJobs: readonly Job[] = [
  { name: "cases.bring-back", everyMs: 5 * SECOND_MS, slot: null, run: bringBackDueCases },
  { name: "cases.expire-holds", everyMs: 10 * SECOND_MS, slot: null, run: expireHolds },
  { name: "cases.lapse", everyMs: 60 * SECOND_MS, slot: null, run: lapseUnreachedCases },
  { name: "cases.free-stranded", everyMs: 60 * SECOND_MS, slot: null, run: freeStrandedCases },
  // People expect linked cases to rise at once.
  { name: "cases.refresh-linked", everyMs: 0.3 * SECOND_MS, slot: null, run: refreshLinkedCases },
];
