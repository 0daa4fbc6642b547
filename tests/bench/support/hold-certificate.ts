import { bestInHindsight, logLoss, type Scorer } from "@/lib/scorer";
import type { LivedStream } from "./live-stream";

type CertificateCheck = { regret: number; certificate: number };

/**
 * The largest regret against weights that the scorer's certificate covers, beside the certificate; null where it has
 * none. Covered are weights within the bound and, but for `gradient`, all of whose margins, offset included, stay
 * within the margin bound: the best weights in hindsight of several bounds, shortened until they do.
 */
export function holdCertificate(scorer: Scorer, lived: LivedStream): CertificateCheck | null {
  const certificate = scorer.certificate();
  if (certificate === null) return null;
  const { weightBound = 0, marginBound = 6, offset = 0 } = scorer.options;
  const margins = scorer.method === "gradient" ? Number.POSITIVE_INFINITY : marginBound;
  let regret = Number.NEGATIVE_INFINITY;
  for (const bound of [2, 8, weightBound]) {
    const { weights } = bestInHindsight(lived.vectors, lived.labels, bound, offset);
    for (let share = 1; ; share *= 0.9) {
      const { loss, margin } = judge(lived, weights, share, offset);
      if (margin > margins) continue;
      regret = Math.max(regret, lived.loss - loss);
      break;
    }
  }
  return { regret, certificate };
}

/** Loss and largest margin of these weights, shortened to a share. */
function judge({ vectors, labels }: LivedStream, weights: Float64Array, share: number, offset: number) {
  let [loss, margin] = [0, 0];
  vectors.forEach((x, n) => {
    let sum = 0;
    for (let i = 0; i < x.length; i++) sum += (weights[i] as number) * (x[i] as number);
    const logit = offset + share * sum;
    loss += logLoss(logit, labels[n] as number);
    margin = Math.max(margin, Math.abs(logit));
  });
  return { loss, margin };
}
