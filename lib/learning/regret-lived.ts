import "server-only";
import type { Executor } from "@/db/client";
import { yardstickOf } from "./fit-hindsight";
import type { HeldScorer } from "./held-scorer";
import { listFits, lossesLivedBehind, type Regret, regretAt } from "./regret";

/** Of the scores that were given, whichever scorer was in use; null until hindsight has been computed. */
export async function regretLived(db: Executor, held: HeldScorer): Promise<Regret | null> {
  const { signalSetVersion, logSeq, cumulativeLoss, scorer } = held;
  const [fit] = await listFits(db, yardstickOf({ signalSetVersion, options: scorer.options }));
  if (!fit) return null;
  return regretAt(fit, logSeq, cumulativeLoss, await lossesLivedBehind(db, fit.asOfSeq, logSeq));
}
