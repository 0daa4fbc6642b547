import { describe, expect, it } from "vitest";
import {
  asksTypology,
  findingOf,
  type Marker,
  mayCommit,
  moveMarker,
  pressMisuse,
  STOPS,
  typologiesFor,
} from "@/components/desk/marker";
import { TYPOLOGIES } from "@/lib/decisions/codes";
import { CHANNELS } from "@/lib/transactions/codes";

const moved = (...steps: (1 | -1)[]) => steps.reduce<Marker>(moveMarker, "none");

describe("the five-stop marker", () => {
  it("moves towards fraud to the right and towards legitimate to the left", () => {
    expect(moved(1)).toBe("fraudulent_unsure");
    expect(moved(1, 1)).toBe("fraudulent_sure");
    expect(moved(-1)).toBe("legitimate_unsure");
    expect(moved(-1, -1)).toBe("legitimate_sure");
  });

  it("stops at both ends instead of wrapping to the opposite verdict", () => {
    expect(moved(1, 1, 1, 1)).toBe("fraudulent_sure");
    expect(moved(-1, -1, -1)).toBe("legitimate_sure");
  });

  it("comes back to the middle by as many steps", () => {
    expect(moved(1, 1, -1, -1)).toBe("none");
  });

  it("starts from the middle after customer misuse", () => {
    expect(moveMarker("misuse_sure", 1)).toBe("fraudulent_unsure");
    expect(moveMarker("misuse_unsure", -1)).toBe("legitimate_unsure");
  });

  it("goes round sure, unsure and off by the misuse key, from wherever it lies", () => {
    expect(pressMisuse("none")).toBe("misuse_sure");
    expect(pressMisuse("fraudulent_sure")).toBe("misuse_sure");
    expect(pressMisuse("misuse_sure")).toBe("misuse_unsure");
    expect(pressMisuse("misuse_unsure")).toBe("none");
  });
});

describe("what would be committed", () => {
  it("lacks a finding while the marker is in the middle", () => {
    expect(findingOf("none", null)).toEqual({ lacks: "marker" });
    expect(findingOf("none", "counterfeit")).toEqual({ lacks: "marker" });
  });

  it("lacks a typology on a fraudulent stop until one is chosen", () => {
    expect(findingOf("fraudulent_sure", null)).toEqual({ lacks: "typology" });
    expect(findingOf("fraudulent_unsure", "counterfeit")).toEqual({
      finding: { verdict: "fraudulent", confidence: "unsure", typology: "counterfeit" },
    });
  });

  it("drops a typology that was chosen before the marker moved to another verdict", () => {
    expect(findingOf("legitimate_sure", "counterfeit")).toEqual({
      finding: { verdict: "legitimate", confidence: "sure", typology: null },
    });
    expect(findingOf("misuse_unsure", "other")).toEqual({
      finding: { verdict: "customer_misuse", confidence: "unsure", typology: null },
    });
  });

  it("asks for a typology on the fraudulent stops only", () => {
    expect(STOPS.filter(asksTypology)).toEqual(["fraudulent_unsure", "fraudulent_sure"]);
    expect(asksTypology("misuse_sure")).toBe(false);
  });

  it("offers for every channel typologies that fit the number keys, the last of them other", () => {
    for (const channel of CHANNELS) {
      const offered = typologiesFor(channel);
      expect(offered.length).toBeLessThanOrEqual(9);
      expect(offered.at(-1)).toBe("other");
    }
    const all = new Set(CHANNELS.flatMap((channel) => typologiesFor(channel)));
    expect([...all].sort()).toEqual([...TYPOLOGIES].sort());
  });

  it("is dead to Enter for 400 ms after a case appears", () => {
    expect(mayCommit(1_000, 1_399)).toBe(false);
    expect(mayCommit(1_000, 1_400)).toBe(true);
  });
});
