import "server-only";
import type { Database } from "@/db/client";
import { fillGaps, gapsBehind, joinGaps, type NumberGap } from "./number-gaps";
import {
  type ChangeDigest,
  type ChangedCase,
  readChangeDigests,
  readChangedIn,
  readNewestNumbers,
  readNumberedBehind,
  readNumberedIn,
} from "./read-waiting";

/** Clocks of servers differ, and a transaction commits later than the time it writes. */
const OVERLAP_MS = 15_000;
/** How much later is bounded by how long an act waits for its locks; so far back it is looked now and then. */
const LONG_OVERLAP_MS = 120_000;
const LONG_LOOK_EVERY_MS = 5_000;
/** A number that no case has by then was given to a transaction that was rolled back. */
const GAP_KEPT_MS = 10 * 60_000;
const MOST_GAPS = 200;
/** Numbers looked at for gaps at the start: more cases than are on their way at any moment. */
const NUMBERS_AT_START = 10_000;

type Place = {
  lookedAt: Date;
  lookedLongAt: Date;
  isLongDue: boolean;
  /** The highest number seen. Lower ones may still turn up: numbers are given before the commit. */
  highest: number;
  gaps: readonly NumberGap[];
  /** What has been taken in, by the second of its change: most of what is looked at again has not changed. */
  digests: ReadonlyMap<number, string>;
};

export type Look = { rows: ChangedCase[]; place: Place };

/**
 * Finds what other servers have changed: new cases by their number, whatever time they bear, and other changes by
 * their time. Finds the same again and again; whoever asks compares with what is known.
 */
export class ChangeWatch {
  private constructor(private place: Place) {}

  /** Finds from here on whatever a read of all cases that begins after this call might miss. */
  static async begin(db: Database, now: Date): Promise<ChangeWatch> {
    const numbers = await readNewestNumbers(db, NUMBERS_AT_START);
    const [lowest = 0] = numbers.length < NUMBERS_AT_START ? [] : numbers;
    const highest = numbers.at(-1) ?? 0;
    const gaps = joinGaps(gapsBehind(lowest, numbers, now), MOST_GAPS);
    return new ChangeWatch({
      lookedAt: now,
      lookedLongAt: now,
      isLongDue: true,
      highest,
      gaps,
      digests: new Map(),
    });
  }

  /** Looks, and moves on only with `settle`: what was found and not taken in is found once more. */
  async look(db: Database, now: Date): Promise<Look> {
    const { lookedAt, lookedLongAt, isLongDue, highest, gaps, digests } = this.place;
    const isLong = isLongDue || now.getTime() - lookedLongAt.getTime() >= LONG_LOOK_EVERY_MS;
    const arrived = await readNumberedBehind(db, highest);
    const late = await readNumberedIn(db, gaps);
    const since = isLong ? lookedLongAt.getTime() - LONG_OVERLAP_MS : lookedAt.getTime() - OVERLAP_MS;
    const seen = await readChangeDigests(db, new Date(since));
    const changed = await readChangedIn(db, secondsToRead(seen, digests));
    const numbersOf = (rows: readonly ChangedCase[]) => rows.map(({ number }) => number);
    const stillMissing = fillGaps(gaps, numbersOf(late)).filter(
      ({ foundAt }) => now.getTime() - foundAt.getTime() < GAP_KEPT_MS,
    );
    return {
      rows: [...arrived, ...late, ...changed],
      place: {
        lookedAt: now,
        lookedLongAt: isLong ? now : lookedLongAt,
        isLongDue: false,
        highest: arrived.at(-1)?.number ?? highest,
        digests: keptDigests(digests, seen, now.getTime() - 2 * LONG_OVERLAP_MS),
        gaps: joinGaps([...stillMissing, ...gapsBehind(highest, numbersOf(arrived), now)], MOST_GAPS),
      },
    };
  }

  settle({ place }: Look): void {
    this.place = place;
  }
}

const secondsToRead = (seen: readonly ChangeDigest[], known: ReadonlyMap<number, string>) =>
  seen.filter(({ second, digest }) => known.get(second) !== digest).map(({ second }) => second);

function keptDigests(
  known: ReadonlyMap<number, string>,
  seen: readonly ChangeDigest[],
  fromMs: number,
): Map<number, string> {
  const kept = new Map([...known].filter(([second]) => second * 1_000 >= fromMs));
  for (const { second, digest } of seen) kept.set(second, digest);
  return kept;
}
