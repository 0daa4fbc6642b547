import { logLoss } from "./logistic";
import { pulledLogit } from "./pull";
import type { PartReading, Reading } from "./types";

/** Log odds of one part from its z0 and s. */
export function partLogit(part: PartReading, offset: number, z0: number, leverage: number): number {
  return pulledLogit(offset + z0, part.outcomeWeight * leverage);
}

/**
 * Log odds of a mixture p = Σ share_k·sigma(logit_k), without overflow: log p and log(1 - p) are each summed
 * relative to their largest term.
 */
export function mixedLogit(shares: readonly number[], logits: readonly number[]): number {
  return logOfMixture(shares, logits, 1) - logOfMixture(shares, logits, -1);
}

function logOfMixture(shares: readonly number[], logits: readonly number[], label: number): number {
  let largest = Number.NEGATIVE_INFINITY;
  const logs = logits.map((logit, k) => Math.log(shares[k] as number) - logLoss(logit, label));
  for (const log of logs) largest = Math.max(largest, log);
  let sum = 0;
  for (const log of logs) sum += Math.exp(log - largest);
  return largest + Math.log(sum);
}

/** Log odds from places: z0 and s of each part in turn. */
export function readLogit(reading: Reading, places: Float64Array): number {
  const logits = reading.parts.map((part, k) =>
    partLogit(part, reading.offset, places[2 * k] as number, places[2 * k + 1] as number),
  );
  if (logits.length === 1) return logits[0] as number;
  return mixedLogit(
    reading.parts.map((part) => part.share),
    logits,
  );
}

/** z0: the mean of the parts' by share, which is what the weights of a mixture give. */
export function readRawEvidence(reading: Reading, places: Float64Array): number {
  let sum = 0;
  reading.parts.forEach((part, k) => {
    sum += part.share * (places[2 * k] as number);
  });
  return sum;
}

/** s: the mean by share over the parts that forget nothing; a lone part's own. */
export function readLeverage(reading: Reading, places: Float64Array): number {
  if (reading.parts.length === 1) return places[1] as number;
  let sum = 0;
  let shares = 0;
  reading.parts.forEach((part, k) => {
    if (!part.remembers) return;
    sum += part.share * (places[2 * k + 1] as number);
    shares += part.share;
  });
  return sum / shares;
}
