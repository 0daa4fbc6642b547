import { describe, expect, test } from "vitest";
import {
  type Crossing,
  LABELS_PER_FALSE_WARNING,
  type LivedLabel,
  lossEvidence,
  promisedLoss,
  toldProbability,
  WARM_UP_LABELS,
  watchCalibration,
  watchLoss,
} from "@/lib/learning/drift-rules";
import { createScorer, logLoss } from "@/lib/scorer";
import { drawLabelled } from "../scorer/fixture";
import { drawLives, QUEUES, type Queue, sigma } from "./drawn-lives";

/** Every warning of a life, each seen at once. */
function warningsIn(labels: readonly LivedLabel[], watch: typeof watchLoss): Crossing[] {
  const found: Crossing[] = [];
  for (let from = 0; ; ) {
    const { crossing } = watch(labels.slice(from), true);
    if (!crossing) return found;
    found.push(crossing);
    from += crossing.index + 1;
  }
}

describe("the evidence in one loss", () => {
  test("is worth nothing on average: e to its power has mean 1 under what was told", () => {
    for (const told of [-7, -2, -0.3, 0, 1.5, 6]) {
      for (const tilt of [0.5, -0.5]) {
        const p = sigma(told);
        const mean =
          p * Math.exp(lossEvidence(logLoss(told, 1), tilt)) +
          (1 - p) * Math.exp(lossEvidence(logLoss(told, -1), tilt));
        expect(mean).toBeCloseTo(1, 12);
      }
    }
  });

  test("is the loss beyond the promised one, less half of its promised variance, to second order", () => {
    const tilt = 1e-3;
    for (const told of [-5, -1, 0.2, 3]) {
      const p = sigma(told);
      for (const label of [1, -1] as const) {
        const loss = logLoss(told, label);
        const entropy = -p * Math.log(p) - (1 - p) * Math.log(1 - p);
        expect(promisedLoss(loss)).toBeCloseTo(entropy, 10);
        const residual = tilt * (loss - entropy) - (tilt ** 2 / 2) * p * (1 - p) * told ** 2;
        expect(lossEvidence(loss, tilt)).toBeCloseTo(residual, 7);
      }
    }
  });

  test("stays finite where the loss is 0 or a thousand", () => {
    for (const loss of [0, 1e-300, 800, 1_000]) {
      for (const tilt of [0.5, -0.5]) expect(Number.isFinite(lossEvidence(loss, tilt))).toBe(true);
      expect(Number.isFinite(promisedLoss(loss))).toBe(true);
    }
  });

  test("gives back the probability that was told", () => {
    for (const told of [-6, 0, 2]) {
      for (const label of [1, -1] as const) {
        expect(toldProbability({ loss: logLoss(told, label), label })).toBeCloseTo(sigma(told), 12);
      }
    }
  });
});

test("without drift, false warnings are rarer than promised on every kind of queue", () => {
  const [streams, count] = [24, 10_000];
  const labels = streams * count;
  for (const [k, queue] of (Object.keys(QUEUES) as Queue[]).entries()) {
    let loss = 0;
    let calibration = 0;
    for (let stream = 0; stream < streams; stream++) {
      const lived = drawLives({ count, queue, seed: 1_000 * k + stream });
      loss += warningsIn(lived, watchLoss).length;
      calibration += warningsIn(lived, watchCalibration).length;
    }
    console.log(
      `${queue}: ${loss} of the loss, ${calibration} of calibration in ${labels} labels without drift`,
    );
    expect(loss + calibration).toBeLessThanOrEqual(labels / LABELS_PER_FALSE_WARNING);
  }
});

describe("with drift after 1,000 labels", () => {
  const BEFORE = 1_000;
  /** Labels from the change to the first warning of either kind, in order of size, over 60 lives. */
  function delays(queue: Queue, truth: (told: number) => number): number[] {
    return Array.from({ length: 60 }, (_, i) => {
      const before = drawLives({ count: BEFORE, queue, seed: 50_000 + i });
      const after = drawLives({ count: 3_000, queue, seed: 60_000 + i, truth });
      const lived = [...before, ...after.map((one) => ({ ...one, seq: one.seq + BEFORE }))];
      const first = [watchLoss, watchCalibration].map(
        (watch) => watch(lived, true).crossing?.index ?? Number.POSITIVE_INFINITY,
      );
      return Math.min(...first) + 1 - BEFORE;
    })
      .filter((delay) => delay > 0)
      .sort((a, b) => a - b);
  }

  test.each([
    ["fraud becomes e times as likely among rare fraud", "rare", (told: number) => told + 1, 900],
    ["fraud becomes e times as likely in a mixed queue", "mixed", (told: number) => told + 1, 900],
    ["the scores lose most of what they knew", "mixed", (told: number) => 0.4 * told, 400],
    [
      "a new pattern makes one in ten of the unsuspected fraudulent",
      "rare",
      (told: number) => Math.log((sigma(told) + 0.1 * (1 - sigma(told))) / (0.9 * (1 - sigma(told)))),
      300,
    ],
  ] as const)("%s: 19 lives of 20 are warned within the limit", (name, queue, truth, limit) => {
    const found = delays(queue, truth);
    const [middle, late] = [0.5, 0.95].map((share) => found[Math.floor(share * found.length)]);
    console.log(`${name}: half within ${middle} labels, 19 of 20 within ${late}`);
    expect(found.length).toBeGreaterThan(55);
    expect(late).toBeLessThan(limit);
  });

  test("the sum says since when", () => {
    const before = drawLives({ count: BEFORE, queue: "rare", seed: 3 });
    const after = drawLives({ count: 500, queue: "rare", seed: 4, truth: (told) => told + 2 });
    const { crossing } = watchLoss([...before, ...after], true);
    expect(crossing?.statistic).toBeGreaterThan(0);
    expect(Math.abs((crossing?.since ?? 0) - BEFORE)).toBeLessThan(60);
  });

  test("scores that are too timid are told apart from those that are too sure", () => {
    const timid = drawLives({ count: 3_000, queue: "mixed", seed: 5, truth: (told) => 2 * told });
    expect(watchLoss(timid, true).crossing?.statistic).toBeLessThan(0);
    expect(watchCalibration(timid, true).crossing?.statistic).toBeLessThan(0);
  });
});

describe("while a warning stands unseen", () => {
  const drifting = drawLives({ count: 2_000, queue: "rare", seed: 6, truth: (told) => told + 2 });
  const calm = drawLives({ count: 1_500, queue: "rare", seed: 7 });

  test("the same drift warns no second time", () => {
    expect(warningsIn(drifting, watchLoss).length).toBeGreaterThan(3);
    expect(watchLoss(drifting, false).crossing).toBeNull();
    expect(watchCalibration(drifting, false).crossing).toBeNull();
  });

  test("a new drift warns once the statistic has been back in its band", () => {
    const lived = [...calm, ...drifting];
    for (const watch of [watchLoss, watchCalibration]) {
      expect(watch(lived, false).crossing?.index).toBeGreaterThan(calm.length);
    }
  });
});

test("a scorer that learns as it goes warns no more often than promised, and when the world turns it warns", () => {
  const lifeOf = (seed: number, turned: boolean): LivedLabel[] => {
    const { vectors, labels } = drawLabelled(6_000, 10, seed);
    const scorer = createScorer({ dimension: 10 });
    const lived = vectors.map((vector, i) => {
      const label = labels[i] as 1 | -1;
      // Every signal but the bias now speaks for the opposite.
      const x = turned && i >= 3_000 ? vector.map((value, k) => (k === 9 ? value : -value)) : vector;
      const { loss } = scorer.learn(x, label);
      return { seq: i + 1, at: new Date(i), label, loss };
    });
    return lived.slice(WARM_UP_LABELS);
  };
  const watches = [watchLoss, watchCalibration];
  let falseWarnings = 0;
  for (let seed = 0; seed < 20; seed++) {
    for (const watch of watches) falseWarnings += warningsIn(lifeOf(100 * seed, false), watch).length;
  }
  const labels = 20 * (6_000 - WARM_UP_LABELS);
  console.log(`A learning scorer without drift: ${falseWarnings} warnings in ${labels} labels`);
  expect(falseWarnings).toBeLessThanOrEqual(Math.ceil(labels / LABELS_PER_FALSE_WARNING));
  const waits = Array.from({ length: 20 }, (_, seed) => {
    const lived = lifeOf(100 * seed, true);
    return (watchLoss(lived, true).crossing?.seq ?? 6_000) - 3_000;
  });
  console.log(`After the world turned: warned after ${waits.sort((a, b) => a - b).join(", ")} labels`);
  expect(waits.filter((wait) => wait < 200).length).toBeGreaterThanOrEqual(19);
});
