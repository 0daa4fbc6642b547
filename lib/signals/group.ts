import { natsToDecibans } from "../decibans";
import { CATALOGUE, DIMENSION, OFFSETS } from "./catalogue";
import type { Part, Signal } from "./signal";
import { isMissing } from "./vectors";

/** One bar on the balance of evidence. */
export type SignalLine = {
  key: string;
  name: string;
  /** What the signal measured when the score was taken, in words. */
  reading: string;
  /** What the signal is and why it tells. */
  explanation: string;
  decibans: number;
  available: boolean;
};

/**
 * Gathers what the coordinates add into one line per signal, in the catalogue's order. The bias is no signal: its
 * share belongs to the base rate (`everyPaymentNats`), so that base rate, lines and pull add up to the total.
 * @param contributions nats per coordinate, DIMENSION of them
 * @param vector the coordinates as they were scored
 * @param missing one bit per signal, as `vectorOf` made it
 */
export function groupContributions(
  contributions: Float64Array,
  vector: Float64Array,
  missing: Uint8Array,
): SignalLine[] {
  return CATALOGUE.map((signal, s) => {
    const from = OFFSETS[s] as number;
    const to = OFFSETS[s + 1] ?? DIMENSION - 1;
    let nats = 0;
    for (let i = from; i < to; i++) nats += contributions[i] as number;
    const available = !isMissing(missing, s);
    return {
      key: signal.key,
      name: signal.name,
      reading: available ? readingOf(signal, vector.subarray(from, to)) : "not available",
      explanation: signal.sentence,
      decibans: natsToDecibans(nats),
      available,
    };
  });
}

/** What the bias adds, in nats: the same for every payment. */
export function everyPaymentNats(contributions: Float64Array): number {
  return contributions[DIMENSION - 1] as number;
}

/** In words, read back from the coordinates, so that it tells what was scored and not what is known by now. */
export function readingOf(signal: Signal, coordinates: Float64Array): string {
  let at = 0;
  let edge = 0;
  const measured = signal.parts.map((each) => {
    const coordinate = coordinates[at] as number;
    at += each.scales.length;
    if (isBeyondScale(each, coordinate)) edge = coordinate;
    return each.scales[0].fromUnit(coordinate);
  });
  const suffix = edge === 0 ? "" : edge > 0 ? " or more" : " or less";
  return signal.reading(measured) + suffix;
}

/** At the end of its scale a coordinate only says on which side the measure lies. */
function isBeyondScale({ scales: [scale] }: Part, coordinate: number): boolean {
  return !scale.isWhole && Math.abs(coordinate) === 1;
}
