import "server-only";
import type { Job } from "../job";
import { followLog } from "./shadow";

export const learningJobs: readonly Job[] = [
  // Each candidate's row is locked while it learns, so servers share the work without slots.
  { name: "learning.shadow", everyMs: 500, slot: null, run: followLog },
];
