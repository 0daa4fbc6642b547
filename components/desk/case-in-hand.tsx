"use client";
import type { RugView } from "@/lib/cases/schema";
import { BalanceAxis } from "../case/balance-axis";
import { CaseHead, CaseLine } from "../case/case-head";
import { Cautions } from "../case/cautions";
import { Decisions } from "../case/decisions";
import { Facts } from "../case/facts";
import { Links } from "../case/links";
import { Notes } from "../case/notes";
import { Pane } from "../case/pane";
import { SignalBars } from "../case/signal-bars";
import { Timeline } from "../case/timeline";
import { WithoutSignals } from "../case/without-signals";
import { CaseTools } from "./case-tools";
import { CommitLane } from "./commit-lane";
import { DeskDialogs } from "./desk-dialogs";
import { NoHand } from "./no-hand";
import { NoteEditor } from "./note-editor";
import type { Say } from "./quiet-line";
import { Stops } from "./stops";
import { blockedWords, useCaseCommands } from "./use-case-commands";
import type { Desk } from "./use-desk";
import type { FocusWish } from "./use-focus-wish";

type CaseInHandProps = {
  desk: Desk;
  rug: RugView | null;
  focus: FocusWish;
  say: Say;
  scoreHidden: boolean;
  setScoreHidden: (hidden: boolean) => void;
};

const BARS = 6;

/** Balance, finding and facts of the case in hand. Its keys work while the focus is in here. */
export function CaseInHand(props: CaseInHandProps) {
  const { desk, rug, focus, scoreHidden } = props;
  const { hand, state } = desk;
  const commands = useCaseCommands(props);
  const { finding, shortcuts } = commands;
  const evidence = scoreHidden ? null : (hand?.evidence ?? null);
  const note = hand ? (state.notes[hand.caseId] ?? "") : "";
  const onNote = (text: string) => hand && desk.typeNote(hand.caseId, text);
  return (
    <div ref={commands.keys} className="contents" data-case-id={hand?.caseId}>
      <section
        aria-label="Balance"
        className="flex flex-col gap-1 border-edge border-b pt-1 pb-2 bench:col-span-2"
      >
        {hand && (
          <div className="px-3 sm:px-14 bench:hidden">
            <CaseLine view={hand} />
          </div>
        )}
        <BalanceAxis
          thresholds={rug}
          rug={rug?.evidenceDecibans ?? null}
          pointer={evidence}
          instead={
            hand && (hand.evidence === null ? "Score hidden by the policy until the verdict" : "Score hidden")
          }
        />
        {hand ? (
          <>
            <Stops caseNumber={hand.number} marker={finding.marker} onMarker={finding.setMarker} />
            <CommitLane
              channel={hand.transaction.channel}
              marker={finding.marker}
              typology={finding.typology}
              along={finding.ticked.size}
              blocked={blockedWords(hand)}
              showKeys={shortcuts.singleKeys}
              onTypology={finding.setTypology}
              onCommit={commands.commit}
            />
            <CaseTools
              shortcuts={shortcuts}
              scoreHidden={scoreHidden}
              onCommand={commands.run}
              onHelp={() => commands.setDialog("shortcuts")}
            />
            {evidence && (
              <div className="min-h-44">
                <SignalBars key={hand.caseId} evidence={evidence} most={BARS} />
                <div className="mt-1 px-3 sm:px-14">
                  <WithoutSignals lines={evidence.withoutSignals} />
                </div>
              </div>
            )}
          </>
        ) : (
          // As high as what will stand here, so that nothing moves when the case arrives.
          <div className="h-72" />
        )}
      </section>
      {hand ? (
        <div ref={commands.facts} className="relative min-h-0 overflow-y-auto px-4 py-3 sm:px-6">
          <CaseHead view={hand} headingRef={focus.heading} />
          <div className="mt-3 grid gap-x-8 gap-y-5 2xl:grid-cols-[minmax(0,3fr)_minmax(0,2fr)]">
            <div className="flex min-w-0 flex-col gap-5">
              <Pane title="Payment">
                <Facts transaction={hand.transaction} />
              </Pane>
              <Pane title="Links" paneRef={commands.links}>
                <Links
                  links={hand.links}
                  evidence={evidence}
                  ticks={{ ticked: finding.ticked, onTick: finding.tick }}
                />
              </Pane>
            </div>
            <div className="flex min-w-0 flex-col gap-5">
              <Pane title="Notes">
                <Notes notes={hand.notes} />
                <NoteEditor note={note} onNote={onNote} editorRef={commands.note} />
              </Pane>
              {hand.decisions.length > 0 && (
                <Pane title="Earlier verdicts">
                  <Decisions decisions={hand.decisions} />
                </Pane>
              )}
              <Pane title="Timeline">
                <Timeline entries={hand.timeline} />
              </Pane>
              <Cautions />
            </div>
          </div>
        </div>
      ) : (
        <NoHand dry={state.dry} onAsk={desk.askAgain} />
      )}
      <DeskDialogs desk={desk} commands={commands} note={note} onNote={onNote} wish={focus.wish} />
    </div>
  );
}
