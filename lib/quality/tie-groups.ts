import { checkLabelled } from "./labelled-scores";

/** Payments with the same score, the highest score first. */
export type TieGroups = { frauds: Float64Array; legitimate: Float64Array };

export function tieGroupsOf(scores: ArrayLike<number>, labels: ArrayLike<number>): TieGroups {
  checkLabelled(scores, labels);
  const order = Uint32Array.from({ length: scores.length }, (_, i) => i);
  order.sort((a, b) => (scores[b] as number) - (scores[a] as number));
  const frauds: number[] = [];
  const legitimate: number[] = [];
  let last: number | null = null;
  for (const i of order) {
    const score = scores[i] as number;
    if (score !== last) {
      frauds.push(0);
      legitimate.push(0);
      last = score;
    }
    const counts = labels[i] === 1 ? frauds : legitimate;
    counts[counts.length - 1] = (counts.at(-1) as number) + 1;
  }
  return { frauds: Float64Array.from(frauds), legitimate: Float64Array.from(legitimate) };
}

/** Σ (recall gained) · precision over the groups; null without a fraud. */
export function precisionOverGroups({ frauds, legitimate }: TieGroups): number | null {
  let found = 0;
  let seen = 0;
  let sum = 0;
  for (let i = 0; i < frauds.length; i++) {
    const gained = frauds[i] as number;
    found += gained;
    seen += gained + (legitimate[i] as number);
    if (gained > 0) sum += (gained * found) / seen;
  }
  return found === 0 ? null : sum / found;
}
