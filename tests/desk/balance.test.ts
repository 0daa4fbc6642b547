import { describe, expect, it } from "vitest";
import { evidenceLines, evidenceRows, silentSignals } from "@/components/case/evidence-rows";
import { linkGroups } from "@/components/case/link-groups";
import { rugTicks } from "@/components/desk/rug";
import { AXIS_DECIBANS, axisPlace } from "@/components/ui/axis-scale";
import { percentOf, signedDecibans } from "@/components/ui/probability";
import type { EvidenceView, LinkedCase, SignalEvidence } from "@/lib/cases/schema";

const signal = (key: string, decibans: number, available = true): SignalEvidence => ({
  key,
  name: key,
  reading: "",
  explanation: "",
  decibans,
  available,
});

const evidence = (signals: SignalEvidence[], littleExperienceDecibans = 0): EvidenceView => {
  const baseRateDecibans = -20;
  const sum = signals.reduce((total, one) => total + one.decibans, 0);
  return {
    probability: 0.5,
    totalDecibans: baseRateDecibans + sum + littleExperienceDecibans,
    baseRateDecibans,
    signals,
    littleExperienceDecibans,
    withoutSignals: null,
    reviewDecibans: -10,
    holdDecibans: 6,
    scorerName: "First scorer",
    scorerVersion: 1,
    policyVersion: 1,
  };
};

describe("the axis", () => {
  it("has even odds in the middle, fraud to the right, and holds what lies beyond at its ends", () => {
    expect(axisPlace(0)).toBe(0.5);
    expect(axisPlace(AXIS_DECIBANS)).toBe(1);
    expect(axisPlace(-AXIS_DECIBANS)).toBe(0);
    expect(axisPlace(400)).toBe(1);
    expect(axisPlace(-400)).toBe(0);
  });
});

describe("the rug", () => {
  it("draws a hundred thousand cases in no more ticks than there are tenths of a deciban", () => {
    const many = Array.from({ length: 100_000 }, (_, index) => ((index * 7919) % 70_000) / 1_000 - 35);
    expect(rugTicks(many).length).toBeLessThanOrEqual(601);
  });

  it("keeps a lone case visible beside a crowd, and the crowd higher", () => {
    const [lone, crowd] = rugTicks([-10, ...Array.from({ length: 5_000 }, () => 10)]);
    expect(lone?.place).toBeCloseTo(axisPlace(-10), 9);
    expect(lone?.height).toBeGreaterThan(0.25);
    expect(crowd?.height).toBe(1);
  });

  it("is empty when nothing waits", () => {
    expect(rugTicks([])).toEqual([]);
  });
});

describe("the bars", () => {
  const signals = [
    signal("a", 1),
    signal("b", -6),
    signal("c", 4),
    signal("d", 0.5),
    signal("e", 0),
    signal("f", 2),
  ];

  it("add up to the total, whatever is summed in one line", () => {
    for (const most of [1, 2, 3, 10]) {
      const view = evidence(signals, -1.5);
      const sum = evidenceRows(view, most).reduce((total, row) => total + row.decibans, 0);
      expect(sum).toBeCloseTo(view.totalDecibans, 9);
    }
  });

  it("come heaviest first after the base rate, the rest in one line, and never more than asked for", () => {
    const rows = evidenceRows(evidence(signals), 3);
    expect(rows.map((row) => row.key)).toEqual(["base_rate", "b", "c", "rest"]);
    expect(rows.at(-1)?.name).toBe("3 more signals, together");
    expect(rows.at(-1)?.decibans).toBeCloseTo(3.5, 9);
  });

  it("name what is held back for little experience on a line of its own", () => {
    expect(evidenceRows(evidence(signals, 2), 10).at(-1)).toMatchObject({
      kind: "little_experience",
      decibans: 2,
    });
    expect(evidenceRows(evidence(signals), 10).some((row) => row.kind === "little_experience")).toBe(false);
  });

  it("leave out signals that had nothing to read, which are listed apart", () => {
    const view = evidence([signal("a", 1), signal("gone", 0, false)]);
    expect(evidenceRows(view, 10).map((row) => row.key)).toEqual(["base_rate", "a"]);
    expect(silentSignals(view).map((one) => one.key)).toEqual(["gone"]);
  });
});

describe("links", () => {
  const link = (by: LinkedCase["by"], transactionId: string) => ({ by, transactionId }) as LinkedCase;

  it("stand under the signals that look at the same thing, heaviest first, the account before the rest", () => {
    const view = evidence([
      signal("device_24h", 1),
      signal("accounts_on_device", 3),
      signal("amount_size", 9),
    ]);
    const groups = linkGroups([link("device", "1"), link("account", "2"), link("device", "3")], view);
    expect(groups.map(({ by, signals, links }) => [by, signals.map((one) => one.key), links.length])).toEqual(
      [
        ["account", [], 1],
        ["device", ["accounts_on_device", "device_24h"], 2],
      ],
    );
  });

  it("name no signal while the score is hidden", () => {
    expect(linkGroups([link("card", "1")], null)).toMatchObject([{ by: "card", signals: [] }]);
  });
});

describe("figures", () => {
  it("show evidence with a true minus and a plus, and no sign on nothing", () => {
    expect(signedDecibans(12.34)).toBe("+12.3");
    expect(signedDecibans(-7)).toBe("−7.0");
    expect(signedDecibans(-0.04)).toBe("0.0");
  });

  it("never round a possibility away", () => {
    expect(percentOf(0.0314)).toBe("3.1");
    expect(percentOf(0.0000001)).toBe("< 0.1");
    expect(percentOf(0.9999999)).toBe("> 99.9");
    expect(percentOf(0)).toBe("0.0");
  });
});

describe("the balance as a table", () => {
  it("names every signal with what it looks at, the silent ones too, and adds up to its total", () => {
    const lines = evidenceLines(
      evidence(
        [
          {
            ...signal("Amount", 4),
            reading: "3 times the usual",
            explanation: "Against the account's usual",
          },
          { ...signal("Device", 0, false), explanation: "How many accounts share the device" },
          signal("Hour", 0),
        ],
        -1,
      ),
    );
    expect(lines.map(({ name }) => name)).toEqual([
      "Base rate",
      "Amount",
      "Little experience with this pattern",
      "Device",
      "Hour",
      "Total",
      "Review from",
      "Hold from",
    ]);
    expect(lines[1]).toMatchObject({
      reading: "3 times the usual",
      explanation: "Against the account's usual",
    });
    expect(lines[3]).toMatchObject({
      reading: "not available",
      explanation: "How many accounts share the device",
      decibans: 0,
    });
    const upTo = lines.findIndex(({ name }) => name === "Total");
    const sum = lines.slice(0, upTo).reduce((total, line) => total + line.decibans, 0);
    expect(sum).toBeCloseTo(lines[upTo]?.decibans as number, 9);
  });
});
