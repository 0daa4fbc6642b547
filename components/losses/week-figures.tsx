import type { WeekView } from "@/lib/losses/schema";
import { groupDigits } from "@/lib/money";
import { Figure, FigureRow } from "../ui/figure";
import { basisPointText, NOT_DEFINED, percentText } from "./rate-words";

export function WeekFigures({ view }: { view: WeekView }) {
  const { totals, currency } = view;
  const { precision } = totals;
  const bp = totals.fraudRateBp === null ? {} : { unit: "basis points" };
  return (
    <FigureRow>
      <Figure
        label="Net loss"
        value={groupDigits(totals.net)}
        unit={currency}
        note={`gross ${groupDigits(totals.gross)}, recovered ${groupDigits(totals.recovered)}`}
      />
      <Figure
        label="Prevented"
        value={groupDigits(totals.prevented)}
        unit={currency}
        note={`${percentText(totals.valueDetection)} of ${groupDigits(totals.attempted)} attempted`}
      />
      <Figure
        label="Fraud rate"
        value={basisPointText(totals.fraudRateBp)}
        {...bp}
        note={`gross loss in ${groupDigits(totals.settled)} that went through`}
      />
      <Figure
        label="Alerts that were fraud"
        value={percentText(precision?.share ?? null)}
        note={
          precision
            ? `${precision.count} of ${precision.of}; 95 % interval ${percentText(precision.low)} to ${percentText(precision.high)}`
            : "no alert of this week is decided"
        }
      />
      <Figure
        label="Total cost"
        value={groupDigits(totals.totalCost)}
        unit={currency}
        note={`net loss, lost margin and review; per case decided ${
          totals.costPerCase === null ? NOT_DEFINED : `${groupDigits(totals.costPerCase)} of review`
        }`}
      />
    </FigureRow>
  );
}
