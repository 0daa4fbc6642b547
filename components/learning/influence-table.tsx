import type { InfluenceView, PersonInfluence } from "@/lib/learning/influence-schema";
import { Button } from "../ui/button";
import { countText } from "../ui/count";
import { percentOf } from "../ui/probability";
import { RowTh, Table, Td, Th } from "../ui/table";
import { Time } from "../ui/time";
import { CellNote, NotDefinedCell } from "./estimate-cell";

type InfluenceTableProps = {
  view: InfluenceView;
  personId: string;
  /** Null for those who only read. */
  onRemove: ((person: PersonInfluence) => void) | null;
};

export function InfluenceTable({ view, personId, onRemove }: InfluenceTableProps) {
  return (
    <Table caption="Influence of each person's labels" captionHidden>
      <thead>
        <tr>
          <Th className="sticky left-0 bg-paper">Person</Th>
          <Th numeric>Labels</Th>
          <Th numeric>Corrected by others</Th>
          <Th numeric>Overturned by outcomes</Th>
          <Th numeric>Scores would change, decibans</Th>
          <Th numeric>Weights would move</Th>
          <Th>Most on</Th>
          {onRemove && <Th>Acts</Th>}
        </tr>
      </thead>
      <tbody>
        {view.people.map((one) => (
          <tr key={one.person.id}>
            <RowTh className="sticky left-0 min-w-36 bg-paper">
              {one.person.name}
              <Span of={one} />
            </RowTh>
            <Td numeric className="whitespace-nowrap">
              {countText(one.labels)}
              <CellNote>{countText(one.fraudulent)} fraudulent</CellNote>
            </Td>
            <ShareCell share={one.corrected} />
            <ShareCell share={one.overturned} />
            <EffectCells effect={one.effect} reckoned={view.computedAt !== null} />
            {onRemove && (
              <Td>
                {one.labels > 0 &&
                  (one.person.id === personId ? (
                    <span className="block text-small text-soft">Yours: somebody else proposes</span>
                  ) : (
                    <Button
                      small
                      onClick={() => onRemove(one)}
                      aria-label={`Propose to take out the labels of ${one.person.name}`}
                      className="whitespace-nowrap"
                    >
                      Take out …
                    </Button>
                  ))}
              </Td>
            )}
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

function Span({ of: { firstAt, lastAt } }: { of: PersonInfluence }) {
  if (!firstAt || !lastAt) return null;
  return (
    <span className="block text-small text-soft">
      <Time at={firstAt} as="day" />
      {firstAt.slice(0, 10) !== lastAt.slice(0, 10) && (
        <>
          {" "}
          to <Time at={lastAt} as="day" />
        </>
      )}
    </span>
  );
}

function ShareCell({ share }: { share: PersonInfluence["corrected"] }) {
  if (!share) return <NotDefinedCell />;
  return (
    <Td numeric className="whitespace-nowrap">
      {percentOf(share.value)}
      {"\u202f%"}
      <CellNote>
        {percentOf(share.low)}–{percentOf(share.high)}
        {"\u202f%"}
      </CellNote>
      <CellNote>
        {countText(share.count)} of {countText(share.n)}
      </CellNote>
    </Td>
  );
}

type EffectCellsProps = { effect: PersonInfluence["effect"]; reckoned: boolean };

function EffectCells({ effect, reckoned }: EffectCellsProps) {
  if (!effect) {
    const note = reckoned ? "none" : "not yet";
    return (
      <>
        <Td numeric>
          <CellNote>{note}</CellNote>
        </Td>
        <Td numeric>
          <CellNote>{note}</CellNote>
        </Td>
        <Td>–</Td>
      </>
    );
  }
  const { meanDecibans, largestDecibans, weightDistance, signals } = effect;
  return (
    <>
      {meanDecibans === null ? (
        <NotDefinedCell why="no payment to look at" />
      ) : (
        <Td numeric className="whitespace-nowrap">
          {meanDecibans.toFixed(2)}
          {largestDecibans !== null && <CellNote>at most {largestDecibans.toFixed(1)}</CellNote>}
        </Td>
      )}
      <Td numeric>{weightDistance.toFixed(2)}</Td>
      <Td className="min-w-44 text-small">
        {signals.map(({ key, name }) => (
          <span key={key} className="block">
            {name}
          </span>
        ))}
      </Td>
    </>
  );
}
