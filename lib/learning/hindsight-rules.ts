/** Shortest prefix of the log that is fitted. */
const FIRST_PREFIX = 50;
/** A new fit is due after so many labels more, or after this share of them where that is fewer. */
const LABELS_TO_A_NEW_FIT = 100;
const SHARE_TO_A_NEW_FIT = 0.05;

/**
 * Numbers of labels whose best weights are kept: each prefix twice as long as the one before, so that they stay where
 * they are while the log grows, and all of them.
 */
export function prefixesOf(labels: number): number[] {
  const prefixes: number[] = [];
  for (let prefix = FIRST_PREFIX; prefix < labels; prefix *= 2) prefixes.push(prefix);
  if (labels > 0) prefixes.push(labels);
  return prefixes;
}

/** @param labels of the newest fit @param since labels that have come behind it */
export function isNewFitDue(labels: number, since: number): boolean {
  return since > 0 && since >= Math.min(LABELS_TO_A_NEW_FIT, SHARE_TO_A_NEW_FIT * labels);
}
