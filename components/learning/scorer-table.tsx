import type { LearningView, ScorerFigures } from "@/lib/learning/learning-schema";
import { countText } from "../ui/count";
import { Table, Th } from "../ui/table";
import { ScorerRow } from "./scorer-row";

type ScorerTableProps = {
  view: LearningView;
  /** Null for those who only read. */
  acts: {
    onPromote: (scorer: ScorerFigures) => void;
    onDrop: (scorer: ScorerFigures) => void;
    promotionWaits: (scorer: ScorerFigures) => boolean;
  } | null;
};

export function ScorerTable({ view: { scorers, capacityPerDay }, acts }: ScorerTableProps) {
  return (
    <Table caption="Scorers compared on the same labels" captionHidden>
      <thead>
        <tr>
          <Th className="sticky left-0 bg-paper">Scorer</Th>
          <Th numeric>Labels predicted</Th>
          <Th numeric>Loss per label, nats</Th>
          <Th numeric>Regret, nats</Th>
          <Th numeric>Brier</Th>
          <Th numeric>AUC</Th>
          <Th numeric>Average precision</Th>
          <Th numeric>Precision in the top {countText(capacityPerDay)} a day</Th>
          {acts && <Th>Acts</Th>}
        </tr>
      </thead>
      <tbody>
        {scorers.map((scorer) => (
          <ScorerRow
            key={scorer.id}
            scorer={scorer}
            acts={
              acts && {
                onPromote: () => acts.onPromote(scorer),
                onDrop: () => acts.onDrop(scorer),
                promotionWaits: acts.promotionWaits(scorer),
              }
            }
          />
        ))}
      </tbody>
    </Table>
  );
}
