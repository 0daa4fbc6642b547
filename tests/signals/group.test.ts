import { describe, expect, it } from "vitest";
import { natsToDecibans } from "@/lib/decibans";
import { createScorer } from "@/lib/scorer";
import { CATALOGUE, DIMENSION } from "@/lib/signals/catalogue";
import { everyPaymentNats, groupContributions } from "@/lib/signals/group";
import { vectorOf } from "@/lib/signals/vectors";
import { activityOf, bareHistory, barePayment, entity, fullPayment, HOUR, noHistory } from "./example";

describe("evidence by signal", () => {
  const scorer = createScorer({ dimension: DIMENSION, offset: -4.6 });
  const history = { ...noHistory(), account: entity(activityOf({ agoMs: HOUR })) };
  for (const label of [1, -1, 1] as const) scorer.learn(vectorOf(fullPayment, history).vector, label);

  it("adds up, with base rate and pull, to the total", () => {
    const { vector, missing } = vectorOf({ ...fullPayment, amountBaseMinor: 90_000 }, history);
    const { contributions, offset, pull, logit } = scorer.explain(vector);
    const lines = groupContributions(contributions, vector, missing);
    expect(lines.map(({ key }) => key)).toEqual(CATALOGUE.map(({ key }) => key));
    const sum = lines.reduce((total, { decibans }) => total + decibans, 0);
    expect(sum + natsToDecibans(offset + everyPaymentNats(contributions) + pull)).toBeCloseTo(
      natsToDecibans(logit),
      9,
    );
    expect(sum).not.toBe(0);
  });

  it("says of a signal that is not available so, and that it adds nothing", () => {
    const { vector, missing } = vectorOf(barePayment, bareHistory());
    const lines = groupContributions(scorer.explain(vector).contributions, vector, missing);
    const device = lines.find(({ key }) => key === "new_device");
    expect(device).toMatchObject({ available: false, reading: "not available", decibans: 0 });
    expect(lines.find(({ key }) => key === "amount_size")).toMatchObject({
      available: true,
      reading: "about 200",
    });
  });
});
