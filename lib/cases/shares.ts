/** Hand-outs since a case of each guaranteed share was served. */
export type ShareCount = { sinceOverdue: number; sinceSample: number };

export type ShareTerms = { overdueEvery: number; sampleEvery: number };

export type Share = "overdue" | "sample";

/**
 * Shares whose turn the coming hand-out is, the rarer one first. Where the turns of both fall together, or there was
 * no such case when the turn came, the share stays due for the hand-outs that follow.
 */
export function sharesDue(count: ShareCount, terms: ShareTerms): Share[] {
  const due: Share[] = [];
  if (count.sinceSample + 1 >= terms.sampleEvery) due.push("sample");
  if (count.sinceOverdue + 1 >= terms.overdueEvery) due.push("overdue");
  return due;
}

/**
 * The count after a hand-out that served `share`, or none. A turn that was served late does not move those behind it,
 * so that over many hand-outs every k-th is served; turns for which there was no case are not made up for.
 */
export function countHandOut(count: ShareCount, terms: ShareTerms, share: Share | null): ShareCount {
  return {
    sinceOverdue: next(count.sinceOverdue, terms.overdueEvery, share === "overdue"),
    sinceSample: next(count.sinceSample, terms.sampleEvery, share === "sample"),
  };
}

function next(since: number, every: number, served: boolean): number {
  return served ? (since + 1) % every : since + 1;
}
