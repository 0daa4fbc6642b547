import type { ReactNode } from "react";
import type { Estimate } from "@/lib/learning/learning-schema";
import { countText } from "../ui/count";
import { Td } from "../ui/table";
import { NOT_DEFINED } from "./figure-text";

type EstimateCellProps = {
  estimate: Estimate | null;
  say: (value: number) => string;
  /** Behind the figure and behind its interval: "%". */
  unit?: string;
};

/** A figure, beneath it its 95 % interval and how many payments it is over. */
export function EstimateCell({ estimate, say, unit }: EstimateCellProps) {
  if (!estimate) return <NotDefinedCell />;
  const { value, low, high, n, positives, method } = estimate;
  const behind = unit ? `\u202f${unit}` : "";
  return (
    <Td numeric className="whitespace-nowrap">
      {`${say(value)}${behind}`}
      <CellNote title={`95 % interval: ${method}`}>{`${say(low)}–${say(high)}${behind}`}</CellNote>
      <CellNote title={`${countText(positives)} of them fraudulent`}>n {countText(n)}</CellNote>
    </Td>
  );
}

export function NotDefinedCell({ why }: { why?: string }) {
  return (
    <Td numeric>
      <CellNote>{NOT_DEFINED}</CellNote>
      {why && <CellNote>{why}</CellNote>}
    </Td>
  );
}

/** Small print of a cell, on a line of its own. */
export function CellNote({ title, children }: { title?: string; children: ReactNode }) {
  return (
    <span title={title} className="block font-sans text-small text-soft tabular-nums">
      {children}
    </span>
  );
}
