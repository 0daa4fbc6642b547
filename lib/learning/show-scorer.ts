import "server-only";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { spansOf } from "../signals/what-would-change";
import { readScorerInUse } from "./held-scorer";
import { regretLived } from "./regret-lived";
import type { ScorerView } from "./schema";

export async function showScorer(ctx: Context): Promise<ScorerView> {
  demand(ctx, "scorer.read");
  const held = await readScorerInUse(ctx.db);
  const { version, cumulativeLoss, scorer, signals } = held;
  const { options } = scorer;
  const regret = await regretLived(ctx.db, held);
  const weights = scorer.weights();
  return {
    version,
    method: scorer.method,
    weightBound: options.weightBound ?? 0,
    featureBound: options.featureBound ?? 0,
    decisions: scorer.labels,
    cumulativeLoss,
    hindsightLoss: regret?.hindsightLoss ?? null,
    hindsightLabels: regret?.labels ?? null,
    regret: regret?.value ?? null,
    offset: options.offset ?? 0,
    certificate: scorer.certificate(),
    signals: spansOf(signals).map(({ key, name, from, to }) => ({
      key,
      name,
      weights: [...weights.subarray(from, to)],
    })),
  };
}
