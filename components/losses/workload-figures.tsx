import type { WeekView } from "@/lib/losses/schema";
import { countText } from "../ui/count";
import { Figure, FigureRow } from "../ui/figure";

export function WorkloadFigures({ workload }: { workload: WeekView["workload"] }) {
  const { opened, decided, waiting, overdue, lapsed } = workload;
  return (
    <FigureRow>
      <Figure label="Opened" value={countText(opened)} unit="cases" />
      <Figure label="Decided" value={countText(decided)} unit="cases" />
      <Figure label="Waiting at the end" value={countText(waiting)} unit="cases" />
      <Figure label="Overdue among them" value={countText(overdue)} unit="cases" />
      <Figure label="Lapsed" value={countText(lapsed)} unit="cases" note="nobody reached them in time" />
    </FigureRow>
  );
}
