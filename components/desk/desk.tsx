"use client";
import { useCallback, useState } from "react";
import type { CaseState } from "@/lib/cases/codes";
import { CaseInHand } from "./case-in-hand";
import { useQuietLine } from "./quiet-line";
import { RankedList } from "./ranked-list";
import { Refusals } from "./refusals";
import { StatusBar } from "./status-bar";
import { useDesk } from "./use-desk";
import { useFocusWish } from "./use-focus-wish";
import { useLiveQueue } from "./use-live-queue";
import { useRankedList, useRug } from "./use-ranked-list";
import { useScoreHidden } from "./use-score-hidden";

type DeskProps = {
  personId: string;
  /** Asked for by a link: comes to hand first. */
  wantedCaseId: string | null;
};

/** The reviewer's bench: the axis across the top, the case in hand beneath, the ranked list beside it. */
export function Desk({ personId, wantedCaseId }: DeskProps) {
  const [line, say] = useQuietLine();
  const list = useRankedList();
  const desk = useDesk(personId, wantedCaseId, say, list.afterMove);
  const focus = useFocusWish();
  const [scoreHidden, setScoreHidden] = useScoreHidden();
  const [paused, setPaused] = useState(false);
  const rug = useRug(list, paused);
  const { heardOf, askAgain } = desk;
  const { noteQueue, noteCase } = list;
  const live = useLiveQueue({
    paused,
    onOpen: useCallback(() => heardOf(null), [heardOf]),
    onQueue: useCallback(
      (queue: { version: number; total: number }) => {
        noteQueue(queue);
        askAgain();
      },
      [noteQueue, askAgain],
    ),
    onCase: useCallback(
      (changed: { caseId: string; state: CaseState }) => {
        noteCase(changed);
        // A claim is this Desk's own, or will be refused by name; everything else is worth a look.
        if (changed.state !== "claimed") heardOf(changed.caseId);
      },
      [noteCase, heardOf],
    ),
  });
  const { hand, state } = desk;
  const showScores = !scoreHidden && (hand === null || hand.evidence !== null);
  const pick = (caseId: string, number: number) => {
    focus.wish();
    desk.takeInHand(caseId, `Case ${number}`);
  };
  return (
    <div className="flex flex-col bench:h-[calc(100dvh-2.8125rem)]">
      <h1 className="sr-only">Desk</h1>
      <div className="grid min-h-0 flex-1 grid-cols-1 bench:grid-cols-[minmax(0,1fr)_30rem] bench:grid-rows-[auto_minmax(0,1fr)]">
        <CaseInHand {...{ desk, rug, focus, say, scoreHidden, setScoreHidden }} />
        <div className="flex h-[32rem] min-h-0 flex-col border-rule border-t px-2 bench:h-auto bench:border-l">
          <RankedList
            list={list}
            ready={state.ready}
            thresholds={showScores ? rug : null}
            onPick={(item) => pick(item.caseId, item.number)}
            onLeave={focus.now}
          />
        </div>
      </div>
      <Refusals sent={state.sent} onDismiss={desk.dismiss} />
      <StatusBar
        line={line}
        sending={state.sent.filter((one) => one.state === "sending").length}
        live={live}
        paused={paused}
        onPause={setPaused}
      />
    </div>
  );
}
