import type { DecideView } from "@/lib/decisions/schema";

const cases = (count: number): string => (count === 1 ? "1 case" : `${count} cases`);

/** What one decision did to the rest: "37 cases moved; 4 now rank above the hold line; no payment changed". */
export function movedLine(moved: DecideView["moved"]): string {
  if (moved === null) return "The scorer has learned; what moved was not counted.";
  const parts = [`${cases(moved.up + moved.down)} moved`];
  if (moved.aboveHoldLine > 0) parts.push(`${moved.aboveHoldLine} now rank above the hold line`);
  if (moved.belowHoldLine > 0) parts.push(`${moved.belowHoldLine} now rank below it`);
  if (moved.aboveHoldLine === 0 && moved.belowHoldLine > 0) {
    parts[1] = `${moved.belowHoldLine} now rank below the hold line`;
  }
  return `${parts.join("; ")}; no payment changed.`;
}
