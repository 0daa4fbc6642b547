import "server-only";
import { type Job, slotOfMinutes } from "../job";
import { fitHindsight } from "./fit-hindsight";
import { learnMatured } from "./learn-matured";
import { raiseDriftWarnings } from "./raise-drift-warnings";
import { followLog } from "./shadow";

export const learningJobs: readonly Job[] = [
  // Each candidate's row is locked while it learns, so servers share the work without slots.
  { name: "learning.shadow", everyMs: 500, slot: null, run: followLog },
  { name: "learning.hindsight", everyMs: 30_000, slot: slotOfMinutes(1), run: fitHindsight },
  { name: "learning.matured", everyMs: 600_000, slot: slotOfMinutes(24 * 60), run: learnMatured },
  { name: "learning.drift", everyMs: 30_000, slot: slotOfMinutes(1), run: raiseDriftWarnings },
];
