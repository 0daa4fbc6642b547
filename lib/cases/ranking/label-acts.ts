import type { HeldScorer } from "../../learning/held-scorer";
import type { LoggedLabel, ScorerNews } from "./read-waiting";

/** From about as many labels as a vector has coordinates on, computing anew is cheaper than moving label by label. */
export const MOST_STEPS = 64;

/** The labels that lead on to where the scorer stands; null when its state has to be taken from the database. */
export function leadingTo({ labels, ...head }: ScorerNews, held: HeldScorer): LoggedLabel[] | null {
  if (head.id !== held.id) return null;
  if (head.logSeq === held.logSeq) return head.version === held.version ? [] : null;
  if (labels.length > MOST_STEPS || labels.some(({ place }) => place !== null)) return null;
  const leadsOn =
    labels.at(-1)?.scorerVersion === head.version && held.version + labels.length === head.version;
  return leadsOn ? labels : null;
}

/** Labels that one act brought belong together: what moved is counted once for all of them. */
export function actsOf(labels: readonly LoggedLabel[]): LoggedLabel[][] {
  const acts: LoggedLabel[][] = [];
  for (const label of labels) {
    const before = acts.at(-1)?.at(-1);
    const isSameAct = before?.personId === label.personId && before.at.getTime() === label.at.getTime();
    if (isSameAct) acts.at(-1)?.push(label);
    else acts.push([label]);
  }
  return acts;
}
