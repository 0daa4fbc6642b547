import type { ScorerFigures } from "@/lib/learning/learning-schema";
import { Button } from "../ui/button";
import { countText } from "../ui/count";
import { percentOf } from "../ui/probability";
import { RowTh, Td } from "../ui/table";
import { Time } from "../ui/time";
import { CellNote, EstimateCell, NotDefinedCell } from "./estimate-cell";
import { brierText, lossText, natsText, shareText, signedNats } from "./figure-text";
import { METHOD_WORDS } from "./method-words";
import { optionsText } from "./options-text";

type ScorerRowProps = {
  scorer: ScorerFigures;
  /** Null for those who only read. */
  acts: { onPromote: () => void; onDrop: () => void; promotionWaits: boolean } | null;
};

export function ScorerRow({ scorer, acts }: ScorerRowProps) {
  const { name, role, method, startedAt, predicted, livedPredicted, behind, meanLoss, regret, certificate } =
    scorer;
  return (
    <tr>
      <RowTh className="sticky left-0 min-w-40 max-w-64 bg-paper">
        <span className="font-strong">{name}</span>
        <span className="block text-small text-soft">
          {role === "in_use" ? "In use" : "Beside it"}, begun <Time at={startedAt} as="day" />
        </span>
        <span className="block text-small text-soft" title={METHOD_WORDS[method].does}>
          {METHOD_WORDS[method].name}; {optionsText(scorer.options)}
        </span>
      </RowTh>
      <Td numeric className="whitespace-nowrap">
        {countText(predicted)}
        {livedPredicted < predicted && <CellNote>{countText(livedPredicted)} as they came</CellNote>}
        {behind > 0 && <CellNote>{countText(behind)} not yet taken in</CellNote>}
      </Td>
      {meanLoss === null ? (
        <NotDefinedCell />
      ) : (
        <Td numeric className="whitespace-nowrap">
          {lossText(meanLoss)}
          <CellNote>{natsText(scorer.cumulativeLoss)} in all</CellNote>
          <CellNote>n {countText(predicted)}</CellNote>
        </Td>
      )}
      {regret === null ? (
        <NotDefinedCell why="not reckoned yet" />
      ) : (
        <Td numeric className="whitespace-nowrap">
          {signedNats(regret.value)}
          {certificate !== null && <CellNote>log now: at most {natsText(certificate)}</CellNote>}
          <CellNote>n {countText(regret.labels)}</CellNote>
        </Td>
      )}
      <EstimateCell estimate={scorer.brier} say={brierText} />
      <EstimateCell estimate={scorer.auc} say={shareText} />
      <EstimateCell estimate={scorer.averagePrecision} say={shareText} />
      <EstimateCell estimate={scorer.precisionAtCapacity} say={percentOf} unit="%" />
      {acts && <Td>{role === "candidate" && <CandidateActs name={name} {...acts} />}</Td>}
    </tr>
  );
}

type CandidateActsProps = NonNullable<ScorerRowProps["acts"]> & { name: string };

function CandidateActs({ name, onPromote, onDrop, promotionWaits }: CandidateActsProps) {
  return (
    <span className="flex flex-col items-start gap-1.5">
      {promotionWaits ? (
        <a href="#approvals" className="text-small underline decoration-edge underline-offset-4">
          Promotion waits for approval
        </a>
      ) : (
        <Button
          small
          onClick={onPromote}
          aria-label={`Propose promotion of ${name}`}
          className="whitespace-nowrap"
        >
          Propose promotion
        </Button>
      )}
      <Button small onClick={onDrop} aria-label={`Drop ${name}`}>
        Drop
      </Button>
    </span>
  );
}
