"use client";
import { useLayoutEffect, useRef, useState } from "react";
import type { CaseView } from "@/lib/cases/schema";
import type { Act, TogetherItem } from "./desk-state";
import { previousCase, type Sent, undoable } from "./desk-state";
import type { Command } from "./key-table";
import { asksTypology, findingOf, mayCommit, moveMarker, pressMisuse, typologiesFor } from "./marker";
import type { Say } from "./quiet-line";
import type { Desk } from "./use-desk";
import type { KeyActions } from "./use-desk-keys";
import { useDeskKeys, useUndoKey } from "./use-desk-keys";
import { useFinding } from "./use-finding";
import type { FocusWish } from "./use-focus-wish";
import { useShortcuts } from "./use-shortcuts";

export type OpenDialog = "escalate" | "wait" | "shortcuts" | Sent | null;

type CaseCommandsProps = {
  desk: Desk;
  focus: FocusWish;
  say: Say;
  scoreHidden: boolean;
  setScoreHidden: (hidden: boolean) => void;
};

/** Why the case cannot be decided from here now, in words; null while it can. */
export function blockedWords(hand: CaseView): string | null {
  if (hand.mine) return null;
  const holder = hand.claimedBy ? ` ${hand.claimedBy.name} has it.` : "";
  return `No longer in your hands.${holder} Take the next case.`;
}

/** What every key and button of the case in hand does. */
export function useCaseCommands({ desk, focus, say, scoreHidden, setScoreHidden }: CaseCommandsProps) {
  const { hand, state } = desk;
  const caseId = hand?.caseId ?? null;
  const finding = useFinding(caseId);
  const [dialog, setDialog] = useState<OpenDialog>(null);
  const [shortcuts, setShortcuts] = useShortcuts();
  const links = useRef<HTMLElement>(null);
  const note = useRef<HTMLTextAreaElement>(null);
  const facts = useRef<HTMLDivElement>(null);
  const appearedMs = useRef(0);
  const { fulfil } = focus;
  useLayoutEffect(() => {
    appearedMs.current = performance.now();
    if (facts.current) facts.current.scrollTop = 0;
    if (caseId !== null) fulfil();
  }, [caseId, fulfil]);

  const leaveWith = (act: Act) => {
    setDialog(null);
    focus.wish();
    desk.commit(act);
  };
  const commit = () => {
    if (!hand || !mayCommit(appearedMs.current, performance.now())) return;
    const blocked = blockedWords(hand);
    if (blocked) return say(blocked, true);
    const found = findingOf(finding.marker, finding.typology);
    if ("lacks" in found) {
      return say(found.lacks === "marker" ? "Move the marker first: ← or →." : "Choose the typology first.");
    }
    leaveWith({
      kind: "decision",
      finding: found.finding,
      note: state.notes[hand.caseId] ?? "",
      scoreWasHidden: scoreHidden || hand.evidence === null,
      together: togetherOf(hand, finding.ticked),
    });
  };
  const askUndo = () => {
    const sent = undoable(state, Date.now());
    if (sent) setDialog(sent);
    else say("No decision of yours can be taken back now.");
  };
  const previous = () => {
    const before = previousCase(state);
    if (before === null) return say("There is no case before this one.");
    const sent = state.sent.find((one) => one.case.caseId === before);
    if (sent?.state === "done" && sent.act.kind === "decision") {
      return say(`Case ${sent.case.number} is decided. Ctrl+Z takes the decision back while it can be.`);
    }
    focus.wish();
    desk.takeInHand(before, "The case before");
  };
  const commands: Record<Command, () => void> = {
    escalate: () => hand && setDialog("escalate"),
    wait: () => hand && setDialog("wait"),
    previous,
    next: () => {
      focus.wish();
      desk.putBack();
    },
    score: () => {
      if (hand?.evidence === null) say("The policy hides the score until the verdict is given.");
      else setScoreHidden(!scoreHidden);
    },
    links: () => (links.current?.querySelector<HTMLElement>("input, a") ?? links.current)?.focus(),
    note: () => note.current?.focus(),
    misuse: () => finding.setMarker(pressMisuse(finding.marker)),
  };
  const actions: KeyActions = {
    move: (step) => finding.setMarker(moveMarker(finding.marker, step)),
    digit: (digit) => {
      const typology = hand && typologiesFor(hand.transaction.channel)[digit - 1];
      if (typology && asksTypology(finding.marker)) finding.setTypology(typology);
    },
    enter: commit,
    escape: () => {
      if (document.activeElement === focus.heading.current) finding.setMarker("none");
      focus.now();
    },
    help: () => setDialog("shortcuts"),
    command: (command) => commands[command](),
  };
  const keys = useDeskKeys(shortcuts, actions);
  useUndoKey(askUndo);
  return {
    keys,
    links,
    note,
    facts,
    finding,
    dialog,
    setDialog,
    shortcuts,
    setShortcuts,
    commit,
    leaveWith,
    run: (command: Command) => commands[command](),
  };
}

function togetherOf(hand: CaseView, ticked: ReadonlySet<string>): TogetherItem[] {
  const seen = new Set<string>();
  return hand.links.flatMap((link) => {
    if (!ticked.has(link.transactionId) || seen.has(link.transactionId)) return [];
    seen.add(link.transactionId);
    return [link.caseId ? { caseId: link.caseId } : { transactionId: link.transactionId }];
  });
}
