import { readFileSync } from "node:fs";
import { describe, expect, it } from "vitest";

const css = readFileSync(new URL("../../app/globals.css", import.meta.url), "utf8");

function tokens(block: string): Map<string, string> {
  return new Map(
    [...block.matchAll(/--color-([\w-]+):\s*(#[0-9a-f]{6})/g)].map(([, name = "", hex = ""]) => [name, hex]),
  );
}

const light = tokens(css.slice(css.indexOf("@theme"), css.indexOf("@layer base")));
const dark = tokens(css.slice(css.indexOf('[data-theme="dark"]')));

/** Relative luminance and contrast as WCAG 2.2 defines them. */
function luminance(hex: string): number {
  const channel = (at: number) => {
    const value = Number.parseInt(hex.slice(at, at + 2), 16) / 255;
    return value <= 0.04045 ? value / 12.92 : ((value + 0.055) / 1.055) ** 2.4;
  };
  return 0.2126 * channel(1) + 0.7152 * channel(3) + 0.0722 * channel(5);
}

function contrast(one: string, other: string): number {
  const [lighter = 0, darker = 0] = [luminance(one), luminance(other)].sort((a, b) => b - a);
  return (lighter + 0.05) / (darker + 0.05);
}

const GROUNDS = ["paper", "raised", "sunk"];
const TEXT = ["ink", "soft", "ochre-ink", "verdigris-ink", "accent", "error"];
const MARKS = ["ochre", "verdigris", "edge"];

describe.each([
  ["light", light],
  ["dark", dark],
])("the %s theme", (_, theme) => {
  const hex = (name: string) => {
    const found = theme.get(name);
    if (!found) throw new Error(`no token ${name}`);
    return found;
  };

  it.each(TEXT.flatMap((text) => GROUNDS.map((ground) => [text, ground] as const)))(
    "sets text in %s on %s at 4.5 to 1 or more",
    (text, ground) => {
      expect(contrast(hex(text), hex(ground))).toBeGreaterThanOrEqual(4.5);
    },
  );

  it.each(MARKS.flatMap((mark) => GROUNDS.map((ground) => [mark, ground] as const)))(
    "draws marks in %s on %s at 3 to 1 or more",
    (mark, ground) => {
      expect(contrast(hex(mark), hex(ground))).toBeGreaterThanOrEqual(3);
    },
  );

  it("sets text on the accent and on the error colour at 4.5 to 1 or more", () => {
    expect(contrast(hex("on-accent"), hex("accent"))).toBeGreaterThanOrEqual(4.5);
    expect(contrast(hex("on-accent"), hex("accent-strong"))).toBeGreaterThanOrEqual(4.5);
    expect(contrast(hex("paper"), hex("error"))).toBeGreaterThanOrEqual(4.5);
  });

  it("tells the two meaning colours apart by lightness as well as by hue", () => {
    expect(contrast(hex("ochre"), hex("verdigris"))).toBeGreaterThanOrEqual(1.5);
  });
});

it("gives every colour a value in both themes", () => {
  expect([...dark.keys()].sort()).toEqual([...light.keys()].sort());
});
