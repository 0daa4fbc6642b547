import type { DecideView } from "@/lib/decisions/schema";
import { countText } from "../ui/count";

const cases = (count: number): string => (count === 1 ? "1 case" : `${countText(count)} cases`);

/** What one decision did to the rest: "37 cases moved; 4 now rank above the hold line; no payment changed". */
export function movedLine(moved: DecideView["moved"]): string {
  if (moved === null) return "The scorer has learned; what moved was not counted.";
  const { up, down, aboveHoldLine, belowHoldLine } = moved;
  const crossed = [
    aboveHoldLine > 0 ? `${rank(aboveHoldLine)} above` : null,
    belowHoldLine > 0 ? `${rank(belowHoldLine)} below` : null,
  ].filter((words) => words !== null);
  const line = crossed.length > 0 ? `${crossed.join(" and ")} the hold line; ` : "";
  return `${cases(up + down)} moved; ${line}no payment changed.`;
}

const rank = (count: number): string => (count === 1 ? "1 now ranks" : `${count} now rank`);
