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
    // What left the Desk may come back with another draft, or with none.
    const here = new Map(state.ready.map(({ caseId, draft }) => [caseId, draft]));
    for (const caseId of kept.current.keys()) if (!here.has(caseId)) kept.current.delete(caseId);
    for (const [caseId, draft] of here) if (!kept.current.has(caseId)) kept.current.set(caseId, draft);
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
        const here = latest.current.ready.some((one) => one.caseId === caseId);
        if (here) say(`The note is not kept on the server yet: ${problemWords(error)}.`, true);
      }
    },
    [say],
  );

  const { ready, notes } = state;
  useEffect(() => {
    const timer = setTimeout(() => {
      for (const { caseId } of ready) if (notes[caseId] !== undefined) void keep(caseId);
    }, REST_MS);
    return () => clearTimeout(timer);
  }, [ready, notes, keep]);

  useEffect(() => {
    const leave = () => {
      for (const { caseId } of latest.current.ready) void keep(caseId, true);
    };
    window.addEventListener("pagehide", leave);
    return () => {
      window.removeEventListener("pagehide", leave);
      leave();
    };
  }, [keep]);
  return keep;
}
