"use client";
import { useCallback, useEffect, useReducer, useRef } from "react";
import type { CaseView } from "@/lib/cases/schema";
import { newId } from "@/lib/new-id";
import { ApiProblem, api } from "../api";
import { CASE_STATE_WORDS } from "../words";
import { actLine } from "./act-line";
import {
  type Act,
  type DeskEvent,
  type DeskState,
  deskReducer,
  EMPTY_DESK,
  KEPT_READY,
  type Sent,
} from "./desk-state";
import { movedLine } from "./moved-line";
import type { Say } from "./quiet-line";
import { claimAndRead, deliver, problemWords, readCase, readHeld, stillMine, takeNext } from "./traffic";
import { useDrafts } from "./use-drafts";
import { useLeases } from "./use-leases";

export type Desk = {
  state: DeskState;
  hand: CaseView | null;
  commit: (act: Act) => void;
  takeInHand: (caseId: string, name: string) => void;
  putBack: () => void;
  undo: (sent: Sent) => void;
  typeNote: (caseId: string, note: string) => void;
  dismiss: (sentId: string) => void;
  /** A case may have changed somewhere else (null: any of them): read it again if it is on this Desk. */
  heardOf: (caseId: string | null) => void;
  /** There may be cases again after the server had none. */
  askAgain: () => void;
};

/** The Desk's cases and what is on its way to the server. `onMoved` is told when the ranking has changed by own doing. */
export function useDesk(personId: string, wantedCaseId: string | null, say: Say, onMoved: () => void): Desk {
  const [state, dispatch] = useReducer(deskReducer, EMPTY_DESK);
  const latest = useRef(state);
  useEffect(() => {
    latest.current = state;
  }, [state]);
  useSupply({ personId, wantedCaseId }, state, dispatch, say);
  const keepDraft = useDrafts(state, say);
  useLeases(state, dispatch, keepDraft, say);

  const send = useCallback(
    async (sent: Sent) => {
      const name = `Case ${sent.case.number}`;
      try {
        const answer = await deliver(sent);
        dispatch({ kind: "accepted", sentId: sent.sentId, undoUntil: answer?.undoUntil ?? null });
        const moved = answer ? ` ${movedLine(answer.moved)}` : "";
        say(`${name} is ${actLine(sent.act)}.${moved}`);
        onMoved();
        for (const ready of latest.current.ready) void readAgain(ready, dispatch, say);
      } catch (error) {
        const problem = problemWords(error);
        const back = await stillMine(sent);
        dispatch({ kind: "refused", sentId: sent.sentId, problem, stillMine: back });
        say(`${name} is not ${actLine(sent.act)}: ${problem}.${back ? " It is back in hand." : ""}`, true);
      }
    },
    [say, onMoved],
  );

  const commit = (act: Act) => {
    const [hand] = state.ready;
    if (!hand) return;
    const sentId = newId();
    dispatch({ kind: "committed", sentId, act });
    void send({ sentId, case: hand, act, state: "sending", undoUntil: null, problem: null });
  };

  const takeInHand = (caseId: string, name: string) => {
    const ready = state.ready.find((one) => one.caseId === caseId);
    if (ready) return dispatch({ kind: "taken_in_hand", case: ready });
    claimAndRead(caseId).then(
      (found) => dispatch({ kind: "taken_in_hand", case: found }),
      (error: unknown) => say(`${name} cannot be taken in hand: ${problemWords(error)}.`, true),
    );
  };

  const undo = (sent: Sent) => {
    const name = `Case ${sent.case.number}`;
    const takenBack = async () => {
      const answer = await api("POST /api/cases/{id}/undo", { id: sent.case.caseId });
      dispatch({ kind: "undone", sentId: sent.sentId });
      dispatch({ kind: "taken_in_hand", case: await readCase(sent.case.caseId) });
      say(`The decision on case ${sent.case.number} is taken back. ${movedLine(answer?.moved ?? null)}`);
      onMoved();
    };
    takenBack().catch((error: unknown) =>
      say(`The decision on ${name.toLowerCase()} still stands: ${problemWords(error)}.`, true),
    );
  };

  return {
    state,
    hand: state.ready[0] ?? null,
    commit,
    takeInHand,
    putBack: () => dispatch({ kind: "put_back" }),
    undo,
    typeNote: (caseId, note) => dispatch({ kind: "note_typed", caseId, note }),
    dismiss: (sentId) => dispatch({ kind: "dismissed", sentId }),
    heardOf: useCallback(
      (caseId: string | null) => {
        for (const ready of latest.current.ready) {
          if (caseId === null || ready.caseId === caseId) void readAgain(ready, dispatch, say);
        }
      },
      [say],
    ),
    askAgain: useCallback(() => dispatch({ kind: "may_have_more" }), []),
  };
}

type Dispatch = (event: DeskEvent) => void;

/** With an empty Desk the server is asked again this often, also where no live news arrives. */
const ASK_AGAIN_MS = 20_000;

type SupplyFor = { personId: string; wantedCaseId: string | null };

/** Keeps one case in hand and one claimed and loaded at the elbow, so that a key press need not wait for the server. */
function useSupply({ personId, wantedCaseId }: SupplyFor, state: DeskState, dispatch: Dispatch, say: Say) {
  const asking = useRef(false);
  const resumed = useRef(false);
  const { ready, sent, putBack, dry } = state;
  const wanted = ready.length < KEPT_READY && !dry;
  useEffect(() => {
    if (!wanted || asking.current) return;
    asking.current = true;
    const onTheirWay = sent.filter((one) => one.state === "sending").map((one) => one.case.caseId);
    const notThese = [...putBack, ...onTheirWay, ...ready.map((one) => one.caseId)];
    const supply = async () => {
      if (resumed.current) return [await takeNext(notThese)];
      resumed.current = true;
      const first = await firstCases(personId, wantedCaseId, say);
      return first.length > 0 ? first : [await takeNext(notThese)];
    };
    supply().then(
      (found) => {
        asking.current = false;
        for (const one of found) dispatch(one ? { kind: "served", case: one } : { kind: "ran_dry" });
      },
      (error: unknown) => {
        asking.current = false;
        dispatch({ kind: "ran_dry" });
        say(`No next case: ${problemWords(error)}.`, true);
      },
    );
  }, [personId, wantedCaseId, wanted, ready, sent, putBack, dispatch, say]);

  const waiting = dry && ready.length === 0;
  useEffect(() => {
    if (!waiting) return;
    const timer = setInterval(() => dispatch({ kind: "may_have_more" }), ASK_AGAIN_MS);
    return () => clearInterval(timer);
  }, [waiting, dispatch]);
}

/** What the Desk opens with: the case a link asked for, and those that this person holds already. */
async function firstCases(personId: string, wantedCaseId: string | null, say: Say): Promise<CaseView[]> {
  const wanted: CaseView[] = [];
  if (wantedCaseId !== null) {
    try {
      wanted.push(await claimAndRead(wantedCaseId));
    } catch (error) {
      say(`The case you came for cannot be taken in hand: ${problemWords(error)}.`, true);
    }
  }
  const held = await readHeld(personId);
  return [...wanted, ...held.filter((one) => one.caseId !== wantedCaseId)];
}

/** Brings a case on the Desk up to date, and says so where it is no longer this person's. */
async function readAgain(seen: CaseView, dispatch: Dispatch, say: Say): Promise<void> {
  const gone = (why: string) =>
    seen.mine && say(`Case ${seen.number} is no longer in your hands: ${why}.`, true);
  try {
    const now = await readCase(seen.caseId);
    dispatch({ kind: "read_again", case: now });
    if (!now.mine)
      gone(now.claimedBy ? `${now.claimedBy.name} has it` : CASE_STATE_WORDS[now.state].toLowerCase());
  } catch (error) {
    // Without an answer the case stays as it was seen; a commit will find out.
    if (!(error instanceof ApiProblem) || error.status === 0 || error.status >= 500) return;
    dispatch({ kind: "lost", caseId: seen.caseId });
    gone("it went to somebody else");
  }
}
