import type { LivedLabel } from "@/lib/learning/drift-rules";
import { logLoss } from "@/lib/scorer";
import { seededNumbers } from "../scorer/fixture";

export const sigma = (z: number) => 1 / (1 + Math.exp(-z));

/** Log odds told over the cases that a team decides: from a mixed queue to one where fraud is rare. */
export const QUEUES = {
  mixed: { centre: -1, spread: 1.5 },
  rare: { centre: -3.5, spread: 1.2 },
  wide: { centre: 0, spread: 4 },
  unsure: { centre: 0, spread: 0.5 },
};
export type Queue = keyof typeof QUEUES;

type Drawn = { count: number; queue: Queue; seed: number; truth?: (told: number) => number };

/** Labels that come with the log odds `truth` where others were told. */
export function drawLives({ count, queue, seed, truth = (told) => told }: Drawn): LivedLabel[] {
  const unit = seededNumbers(seed);
  const { centre, spread } = QUEUES[queue];
  return Array.from({ length: count }, (_, i) => {
    const normal = Math.sqrt(-2 * Math.log(1 - unit())) * Math.cos(2 * Math.PI * unit());
    const told = centre + spread * normal;
    const label = unit() < sigma(truth(told)) ? 1 : -1;
    return { seq: i + 1, at: new Date(i * 1_000), label, loss: logLoss(told, label) };
  });
}
