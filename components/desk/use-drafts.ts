"use client";
import { useCallback, useEffect, useRef } from "react";
import { api } from "../api";
import type { DeskState } from "./desk-state";
import type { Say } from "./quiet-line";
import { problemWords } from "./traffic";

/** A note is kept on the server after so long without a keystroke. */
const REST_MS = 800;

export type KeepDraft = (caseId: string, leavingPage?: boolean) => Promise<void>;

/** Keeps half-written notes on the server, so that a lapsed claim or a closed page loses none. */
export function useDrafts(state: DeskState, say: Say): KeepDraft {
  const kept = useRef(new Map<string, string>());
  const latest = useRef(state);
  useEffect(() => {
    latest.current = state;
    for (const { caseId, draft } of state.ready)
      if (!kept.current.has(caseId)) kept.current.set(caseId, draft);
  }, [state]);

  const keep = useCallback<KeepDraft>(
    async (caseId, leavingPage = false) => {
      const note = latest.current.notes[caseId];
      if (note === undefined || note === (kept.current.get(caseId) ?? "")) return;
      kept.current.set(caseId, note);
      try {
        await api("PUT /api/cases/{id}/draft", { id: caseId, body: note }, { keepalive: leavingPage });
      } catch (error) {
        kept.current.delete(caseId);
        say(`The note is not kept on the server yet: ${problemWords(error)}.`, true);
      }
    },
    [say],
  );

  const hand = state.ready[0]?.caseId;
  const note = hand === undefined ? undefined : state.notes[hand];
  useEffect(() => {
    if (hand === undefined || note === undefined) return;
    const timer = setTimeout(() => void keep(hand), REST_MS);
    return () => clearTimeout(timer);
  }, [hand, note, keep]);

  useEffect(() => {
    const leave = () => {
      const inHand = latest.current.ready[0]?.caseId;
      if (inHand !== undefined) void keep(inHand, true);
    };
    window.addEventListener("pagehide", leave);
    return () => window.removeEventListener("pagehide", leave);
  }, [keep]);
  return keep;
}
