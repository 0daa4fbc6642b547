"use client";
import type { Typology } from "@/lib/decisions/codes";
import type { Channel } from "@/lib/transactions/codes";
import { AXIS_INSET } from "../case/balance-axis";
import { Button } from "../ui/button";
import { TYPOLOGY_WORDS } from "../words";
import { findingWords } from "./act-line";
import { KeyCap } from "./key-cap";
import { asksTypology, findingOf, type Marker, typologiesFor } from "./marker";

type CommitLaneProps = {
  channel: Channel;
  marker: Marker;
  typology: Typology | null;
  along: number;
  /** Why this case cannot be decided now, if so. */
  blocked: string | null;
  showKeys: boolean;
  onTypology: (typology: Typology) => void;
  onCommit: () => void;
};

/** Asks the typology of a fraudulent finding, and says what Enter would commit. Keeps its height whatever it shows. */
export function CommitLane(props: CommitLaneProps) {
  const { channel, marker, typology, along, blocked, showKeys, onTypology, onCommit } = props;
  const found = findingOf(marker, typology);
  const ready = "finding" in found && blocked === null;
  return (
    <div className={`${AXIS_INSET} flex min-h-9 flex-wrap items-center justify-between gap-x-4 gap-y-1`}>
      {asksTypology(marker) ? (
        <TypologyChoice {...{ channel, typology, showKeys, onTypology }} />
      ) : (
        <p className="text-small text-soft">{blocked ?? hintFor(marker)}</p>
      )}
      <div className="ml-auto flex items-center gap-3">
        <span className="text-small">
          {"finding" in found && (
            <>
              {findingWords(found.finding)}
              {along > 0 && <strong className="font-strong"> for {along + 1} payments</strong>}
            </>
          )}
        </span>
        <Button look="action" small aria-disabled={!ready} onClick={onCommit}>
          Commit
          {showKeys && (
            <span aria-hidden="true" className="hidden font-mono sm:inline">
              ⏎
            </span>
          )}
        </Button>
      </div>
    </div>
  );
}

function hintFor(marker: Marker): string {
  if (marker === "none") return "← → weighs, Enter commits";
  return marker.startsWith("misuse") ? "Not fraud in the rates, and no label for the scorer" : "";
}

type TypologyChoiceProps = Pick<CommitLaneProps, "channel" | "typology" | "showKeys" | "onTypology">;

function TypologyChoice({ channel, typology, showKeys, onTypology }: TypologyChoiceProps) {
  return (
    <fieldset className="flex flex-wrap items-center gap-x-4 gap-y-1">
      <legend className="sr-only">Typology</legend>
      {typologiesFor(channel).map((one, index) => (
        <label
          key={one}
          className="flex min-h-6 cursor-pointer items-center gap-1.5 text-small has-checked:font-strong has-focus-visible:outline-2 has-focus-visible:outline-accent"
        >
          <input
            type="radio"
            name="typology"
            value={one}
            checked={typology === one}
            onChange={() => onTypology(one)}
            className="accent-accent"
          />
          <KeyCap name={showKeys ? String(index + 1) : null} />
          {TYPOLOGY_WORDS[one]}
        </label>
      ))}
    </fieldset>
  );
}
