import { beforeAll, describe, expect, test } from "vitest";
import { Chance } from "@/db/demo/random";
import { casesChanged } from "@/lib/cases/notify";
import { stopRanking } from "@/lib/cases/ranking/ranking";
import type { KeyActor } from "@/lib/context";
import { decideCase } from "@/lib/decisions/decide";
import { exportScorecard } from "@/lib/learning/export-scorecard";
import { readScorerInUse } from "@/lib/learning/held-scorer";
import { ScorecardView } from "@/lib/learning/scorecard-schema";
import { scorecardView } from "@/lib/learning/scorecard-view";
import { newId } from "@/lib/new-id";
import { createScorer, METHODS, type Scorer, type ScorerOptions } from "@/lib/scorer";
import { CATALOGUE, DIMENSION } from "@/lib/signals/catalogue";
import { signalSetOf } from "@/lib/signals/signal-set";
import { testWorld, WORLD_START, type World } from "../support/world";
import { type CardJson, formulaValue, scoreFromText } from "./card-reader";

const OWN = {
  id: newId(),
  sentence: "Large for a night",
  formula: "amount > 500 and hour < 5",
  middle: 0,
  reach: 1,
};
/** One own signal that is on, one that was switched off again: its coordinate stays and is 0. */
const SIGNALS = signalSetOf(3, {
  catalogueVersion: 1,
  own: [
    { ...OWN, key: "own_off", name: "Off again", position: 0, isOn: false },
    { ...OWN, key: "own_night", name: "Night", position: 1, isOn: true },
  ],
});

const chance = new Chance(77);
function randomVector(): Float64Array {
  const x = Float64Array.from({ length: SIGNALS.dimension }, () =>
    chance.hits(0.5) ? 2 * chance.unit() - 1 : 0,
  );
  x[DIMENSION - 1] = 1;
  x[DIMENSION] = 0;
  return x;
}

function trained(options: Omit<ScorerOptions, "dimension">): Scorer {
  const scorer = createScorer({ dimension: SIGNALS.dimension, offset: -3, ...options });
  for (let n = 0; n < 150; n++) scorer.learn(randomVector(), chance.hits(0.3) ? 1 : -1);
  return scorer;
}

/** As a payment system gets it: text, and nothing of ours. */
const asText = (view: ScorecardView): CardJson => JSON.parse(JSON.stringify(view)) as CardJson;
const cardOf = (scorer: Scorer, example: Float64Array | null = null) =>
  scorecardView(
    { name: "Card", version: 7, method: scorer.method, signals: SIGNALS },
    scorer.scorecard(),
    example,
    WORLD_START,
  );

describe("an evaluation written from the exported text alone", () => {
  test.each(METHODS)("gives the example's score, for a scorer of method %s", (method) => {
    const scorer = trained({ method });
    const view = cardOf(scorer, randomVector());
    expect(ScorecardView.parse(view)).toEqual(view);
    const { example } = view;
    const ours = scoreFromText(asText(view), example?.coordinates ?? []);
    expect(ours.logOdds).toBeCloseTo(example?.logOdds ?? Number.NaN, 9);
    expect(ours.probability).toBeCloseTo(example?.probability ?? Number.NaN, 12);
  });

  test.each(["improper", "aggregate"] as const)(
    "gives what the scorer itself gives, for %s, frozen as it is",
    (method) => {
      const scorer = trained({ method });
      const card = asText(cardOf(scorer));
      for (let n = 0; n < 50; n++) {
        const x = randomVector();
        expect(scoreFromText(card, [...x]).logOdds).toBeCloseTo(scorer.score(x).logit, 8);
      }
      // Longer than the bound, so that scaling down is part of it.
      const long = randomVector().map((entry) => 9 * entry);
      expect(scoreFromText(card, [...long]).logOdds).toBeCloseTo(scorer.score(long).logit, 8);
    },
  );

  test("gives every coordinate of the catalogue from its measure, thresholds and ends of the scale included", () => {
    const { signals } = asText(cardOf(trained({})));
    const formulas = signals.flatMap(({ coordinates }) => coordinates.map(({ formula }) => formula));
    const scales = CATALOGUE.flatMap((signal) => signal.parts.flatMap((part) => part.scales));
    expect(formulas).toHaveLength(scales.length + 1);
    for (const [at, { toUnit, isWhole }] of scales.entries()) {
      const formula = formulas[at] as string;
      for (const v of [0, 1e-9, 0.01, 0.2, 0.5, 0.99, 1, 2, 5, 17, 100, 3_000, 1e6]) {
        // Some measures cannot lie beyond 1, and odds are taken of what lies between 0 and 1.
        if ((isWhole && v > 1) || (formula.includes("logit") && (v === 0 || v >= 1))) continue;
        expect(formulaValue(formula, v), formula).toBeCloseTo(toUnit(v), 12);
      }
    }
  });
});

describe("the card", () => {
  test("names every coordinate but the bias and those of own signals that are off, each once", () => {
    const view = cardOf(trained({}));
    const indices = view.signals.flatMap(({ coordinates }) => coordinates.map(({ index }) => index));
    expect(new Set(indices).size).toBe(indices.length);
    const unnamed = Array.from({ length: view.dimension }, (_, i) => i).filter((i) => !indices.includes(i));
    expect(unnamed).toEqual([view.biasIndex, DIMENSION]);
    for (const { weights } of view.parts) expect(weights).toHaveLength(view.dimension);
  });

  test("explains own signals: formula, scale, what they need and what the fields mean", () => {
    const view = cardOf(trained({}));
    expect(view.signals.at(-1)).toEqual({
      key: "own_night",
      name: "Night",
      sentence: "Large for a night",
      source: "own",
      needs: ["amount", "hour"],
      coordinates: [
        {
          index: DIMENSION + 1,
          measure: "amount > 500 and hour < 5",
          formula: "clip((v − 0) / 1)",
          role: "scale",
        },
      ],
    });
    expect(view.formulaFields.amount).toContain("base currency");
  });

  test("says which guarantee it carries, in words and numbers", () => {
    const averaged = trained({ method: "gradient" });
    const view = cardOf(averaged);
    expect(view).toMatchObject({ kind: "averaged", certificate: averaged.certificate() });
    expect(view.regretPerLabel).toBeCloseTo((averaged.certificate() ?? 0) / 150, 12);
    expect(view.guarantee).toContain("at most that of the best fixed weights");
    const latest = cardOf(trained({}));
    expect(latest).toMatchObject({ kind: "latest", regretPerLabel: null });
    expect(latest.certificate).toBeGreaterThan(0);
    expect(latest.guarantee).toContain("nothing is proven");
  });
});

describe("the export of an installation", () => {
  let world: World;
  const reports: KeyActor = { kind: "key", id: newId(), source: "bank", scopes: ["reports:read"] };

  beforeAll(async () => {
    world = await testWorld();
    const reviewer = await world.person("reviewer");
    const made = await world.waitingCases(12, { seed: 3 });
    casesChanged(made.map(({ caseId }) => caseId));
    for (const [n, { caseId }] of made.slice(0, 8).entries()) {
      await decideCase(world.ctx(reviewer), {
        id: caseId,
        verdict: n % 2 === 0 ? "fraudulent" : "legitimate",
        typology: n % 2 === 0 ? "other" : null,
        confidence: "sure",
        seenVersion: 1,
        scoreWasHidden: false,
        together: [],
      });
    }
    return () => stopRanking(world.db);
  });

  test("is the scorer in use, with the newest payment as the example that comes out", async () => {
    const view = await exportScorecard(world.ctx(reports));
    const held = await readScorerInUse(world.db);
    expect(view.scorer).toEqual({ name: held.name, version: held.version, method: "improper", labels: 8 });
    expect(view.signalSetVersion).toBe(held.signalSetVersion);
    const { example } = view;
    expect(example?.logOdds).toBe(held.scorer.score(Float64Array.from(example?.coordinates ?? [])).logit);
    expect(scoreFromText(asText(view), example?.coordinates ?? []).logOdds).toBeCloseTo(
      example?.logOdds ?? 0,
      9,
    );
  });

  test("is for those who may look at the scorer, and keys for reports", async () => {
    const auditor = await world.person("auditor");
    await expect(exportScorecard(world.ctx(auditor))).resolves.toMatchObject({ format: 1 });
    for (const who of [await world.person("reviewer"), await world.person("administrator")]) {
      await expect(exportScorecard(world.ctx(who))).rejects.toMatchObject({ code: "forbidden" });
    }
    const sender: KeyActor = { ...reports, scopes: ["transactions:write"] };
    await expect(exportScorecard(world.ctx(sender))).rejects.toMatchObject({ code: "forbidden" });
  });

  test("has no example before the first payment", async () => {
    const empty = await testWorld();
    expect((await exportScorecard(empty.ctx(reports))).example).toBeNull();
    await empty.close();
  });
});
