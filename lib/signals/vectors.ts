import { CATALOGUE, DIMENSION } from "./catalogue";
import { measureFacts, type PaymentFields, type PaymentHistory } from "./facts";

export type SignalVector = {
  /** DIMENSION coordinates in [−1, 1], bias last. */
  vector: Float64Array;
  /** One bit per signal of the catalogue, lowest bit of the first byte first: 1 where the signal is not available. */
  missing: Uint8Array;
};

const MISSING_BYTES = Math.ceil(CATALOGUE.length / 8);

/** The signals of one payment as of its own time. A signal whose field or history is missing leaves zeros and a mark. */
export function vectorOf(payment: PaymentFields, history: PaymentHistory): SignalVector {
  const facts = measureFacts(payment, history);
  const vector = new Float64Array(DIMENSION);
  const missing = new Uint8Array(MISSING_BYTES);
  let at = 0;
  for (let s = 0; s < CATALOGUE.length; s++) {
    const start = at;
    let isMissing = false;
    for (const { value, scales } of (CATALOGUE[s] as (typeof CATALOGUE)[number]).parts) {
      const measured = value(facts);
      if (measured === null) isMissing = true;
      for (const scale of scales) vector[at++] = measured === null ? 0 : scale.toUnit(measured);
    }
    if (isMissing) {
      vector.fill(0, start, at);
      missing[s >> 3] = (missing[s >> 3] as number) | (1 << (s & 7));
    }
  }
  vector[at] = 1;
  return { vector, missing };
}

export function isMissing(missing: Uint8Array, signal: number): boolean {
  return (((missing[signal >> 3] ?? 0) >> (signal & 7)) & 1) === 1;
}
