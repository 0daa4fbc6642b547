import { natsToDecibans } from "../decibans";
import { CATALOGUE, DIMENSION, OFFSETS } from "./catalogue";
import { type Part, roughly, type Signal } from "./signal";
import type { OwnDefinition } from "./signal-set";
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
 * Gathers what the coordinates add into one line per signal, in the catalogue's order, the team's own behind. The bias is no signal: its
 * share belongs to the base rate (`everyPaymentNats`), so that base rate, lines and pull add up to the total.
 * @param contributions nats per coordinate
 * @param vector the coordinates as they were scored
 * @param missing one bit per signal, as `vectorOf` and `extendSignals` made it
 * @param own those of the set that the vector is of; without them the catalogue's lines only
 */
export function groupContributions(
  contributions: Float64Array,
  vector: Float64Array,
  missing: Uint8Array,
  own: readonly OwnDefinition[] = [],
): SignalLine[] {
  const lines = CATALOGUE.map((signal, s) => {
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
  return [
    ...lines,
    ...own.filter(({ isOn }) => isOn).map((signal) => ownLine(signal, contributions, vector, missing)),
  ];
}

function ownLine(
  signal: OwnDefinition,
  contributions: Float64Array,
  vector: Float64Array,
  missing: Uint8Array,
): SignalLine {
  const at = DIMENSION + signal.position;
  const available = !isMissing(missing, CATALOGUE.length + signal.position);
  return {
    key: signal.key,
    name: signal.name,
    reading: available ? ownReading(signal, vector[at] ?? 0) : "not available",
    explanation: `${signal.sentence} The team's own signal: ${signal.formula}`,
    decibans: natsToDecibans(contributions[at] ?? 0),
    available,
  };
}

function ownReading({ middle, reach }: OwnDefinition, coordinate: number): string {
  const suffix = Math.abs(coordinate) < 1 ? "" : coordinate > 0 ? " or more" : " or less";
  return `about ${roughly(middle + coordinate * reach)}${suffix}`;
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
