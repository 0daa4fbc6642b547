import { describe, expect, test } from "vitest";
import { againstBaseline, fitBaseline } from "@/lib/learning/drift-baseline";
import { LABELS_PER_FALSE_WARNING, watchCalibration, watchLoss } from "@/lib/learning/drift-rules";
import type { DriftBaseline } from "@/lib/learning/drift-schema";
import { drawLives, QUEUES, type Queue } from "./drawn-lives";

/** Scores that promise too much fraud, and always have. */
const crooked = (told: number) => told - 1.2;
/** Labels that come in before somebody looks at a warning. */
const UNSEEN = 100;

/** Positions at which each warning was raised, all seen after a while, each time with a new baseline. */
function warningsSeen(
  lived: ReturnType<typeof drawLives>,
  watch: typeof watchLoss,
  withBaseline = true,
): number[] {
  const raised: number[] = [];
  let accepted: DriftBaseline | null = null;
  for (let from = 0; ; ) {
    const { crossing } = watch(againstBaseline(lived.slice(from), accepted), true);
    if (!crossing) return raised;
    raised.push(from + crossing.index);
    const seen = Math.min(lived.length, from + crossing.index + 1 + UNSEEN);
    if (withBaseline) accepted = fitBaseline(lived.slice(0, seen), seen - from - crossing.since) ?? accepted;
    from = seen;
  }
}

describe("a baseline", () => {
  test("is the shift by which labels stand apart from what was told", () => {
    const lived = drawLives({ count: 20_000, queue: "mixed", seed: 1, truth: crooked });
    expect(fitBaseline(lived, 1_000_000)?.labels).toBe(2_000);
    const shifts = Array.from(
      { length: 20 },
      (_, i) => fitBaseline(lived.slice(i * 1_000, (i + 1) * 1_000), 1_000)?.shift as number,
    );
    expect(Math.abs(shifts.reduce((sum, shift) => sum + shift, 0) / 20 + 1.2)).toBeLessThan(0.06);
  });

  test("never excuses scores that tell nothing", () => {
    const lost = drawLives({ count: 2_000, queue: "mixed", seed: 6, truth: () => -1 });
    const later = drawLives({ count: 1_000, queue: "mixed", seed: 7, truth: () => -1 });
    const watched = watchLoss(againstBaseline(later, fitBaseline(lost, 2_000)), true);
    expect(watched.crossing?.statistic).toBeGreaterThan(0);
  });

  test("changes no loss where the scores have been right", () => {
    const lived = drawLives({ count: 50, queue: "rare", seed: 2 });
    const same = againstBaseline(lived, { shift: 0, labels: 1_000 });
    same.forEach(({ loss }, i) => {
      expect(loss).toBeCloseTo(lived[i]?.loss as number, 10);
    });
    expect(againstBaseline(lived, null)).toEqual(lived);
  });

  test("stays finite where the loss rounds to 0 or is a thousand", () => {
    const at = new Date(0);
    const far = [0, 1e-300, 1_000].map((loss, i) => ({ seq: i, at, label: 1, loss }));
    for (const { loss } of againstBaseline(far, { shift: 0.5, labels: 500 })) {
      expect(Number.isFinite(loss)).toBe(true);
    }
  });

  test("needs labels enough, of both kinds", () => {
    const lived = drawLives({ count: 499, queue: "mixed", seed: 3 });
    expect(fitBaseline(lived, 500)).toBeNull();
    const legitimate = drawLives({ count: 2_000, queue: "mixed", seed: 4 }).filter(
      ({ label }) => label === -1,
    );
    expect(fitBaseline(legitimate, 500)).toBeNull();
  });
});

test("what has been crooked all along is warned of, and once it was seen hardly ever again", () => {
  const [streams, count] = [16, 10_000];
  for (const queue of ["mixed", "rare", "wide"] satisfies Queue[]) {
    let warned = 0;
    let again = 0;
    let without = 0;
    for (let stream = 0; stream < streams; stream++) {
      const lived = drawLives({ count, queue, seed: 7_000 + stream, truth: crooked });
      for (const watch of [watchLoss, watchCalibration]) {
        const raised = warningsSeen(lived, watch);
        if (raised.length > 0) warned += 1;
        again += Math.max(0, raised.length - 1);
        without += Math.max(0, warningsSeen(lived, watch, false).length - 1);
      }
    }
    const { centre, spread } = QUEUES[queue];
    console.log(
      `${queue} (${centre} ± ${spread}): ${warned} of ${2 * streams} warned, ${again} again in ${streams * count} labels, ${without} without a baseline`,
    );
    expect(warned).toBeGreaterThan(streams);
    // Taken on the very labels that were warned of, a baseline errs to their side: up to three times the
    // promised rate is allowed.
    expect(again).toBeLessThanOrEqual((3 * streams * count) / LABELS_PER_FALSE_WARNING);
    expect(again).toBeLessThan(without / 3);
  }
});

test("a change after that is warned of as soon as without a baseline", () => {
  const waits = Array.from({ length: 20 }, (_, i) => {
    const before = drawLives({ count: 3_000, queue: "mixed", seed: 8_000 + i, truth: crooked });
    const after = drawLives({
      count: 2_000,
      queue: "mixed",
      seed: 9_000 + i,
      truth: (told) => crooked(told) + 2,
    });
    const accepted = fitBaseline(before, 1_000);
    const lived = againstBaseline([...before.slice(-1_000), ...after], accepted);
    const index = watchLoss(lived, true).crossing?.index ?? Number.POSITIVE_INFINITY;
    return index + 1 - 1_000;
  }).sort((a, b) => a - b);
  console.log(`After the change: warned after ${waits.join(", ")} labels`);
  expect(waits.filter((wait) => wait > 0 && wait < 400).length).toBeGreaterThanOrEqual(18);
});
