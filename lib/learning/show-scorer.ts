import "server-only";
import { demand } from "../auth/demand";
import type { Context } from "../context";
import { CATALOGUE, OFFSETS } from "../signals/catalogue";
import { coordinatesOf } from "../signals/signal";
import { readScorerInUse } from "./held-scorer";
import { regretLived } from "./regret-lived";
import type { ScorerView } from "./schema";

export async function showScorer(ctx: Context): Promise<ScorerView> {
  demand(ctx, "scorer.read");
  const held = await readScorerInUse(ctx.db);
  const { version, cumulativeLoss, scorer } = held;
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
    signals: CATALOGUE.map((signal, index) => {
      const from = OFFSETS[index] as number;
      return {
        key: signal.key,
        name: signal.name,
        weights: [...weights.subarray(from, from + coordinatesOf(signal))],
      };
    }),
  };
}
