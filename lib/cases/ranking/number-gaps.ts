/** Numbers `first` to `last` that no case had when they were looked for; `foundAt` is when that was first seen. */
export type NumberGap = { first: number; last: number; foundAt: Date };

/** The numbers missing behind `after` among `numbers`, which rise. */
export function gapsBehind(after: number, numbers: readonly number[], foundAt: Date): NumberGap[] {
  const gaps: NumberGap[] = [];
  let before = after;
  for (const number of numbers) {
    if (number > before + 1) gaps.push({ first: before + 1, last: number - 1, foundAt });
    before = number;
  }
  return gaps;
}

/** What is still missing once `numbers`, which rise, have turned up. */
export function fillGaps(gaps: readonly NumberGap[], numbers: readonly number[]): NumberGap[] {
  return gaps.flatMap((gap) => {
    const found = numbers.filter((number) => number >= gap.first && number <= gap.last);
    return found.length === 0 ? [gap] : gapsBehind(gap.first - 1, [...found, gap.last + 1], gap.foundAt);
  });
}

/** Neighbours joined until there are at most `most`: a look at too much costs a little time, one at too little a case. */
export function joinGaps(gaps: readonly NumberGap[], most: number): NumberGap[] {
  let joined = [...gaps];
  while (joined.length > most) {
    joined = joined.flatMap((gap, index) => {
      if (index % 2 === 1) return [];
      const next = joined[index + 1];
      if (!next) return [gap];
      const foundAt = new Date(Math.max(gap.foundAt.getTime(), next.foundAt.getTime()));
      return [{ first: gap.first, last: next.last, foundAt }];
    });
  }
  return joined;
}
