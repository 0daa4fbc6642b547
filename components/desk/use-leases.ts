"use client";
import { useEffect, useRef } from "react";
import { api } from "../api";
import { lastActiveMs } from "../shell/activity";
import type { DeskEvent, DeskState } from "./desk-state";
import type { Say } from "./quiet-line";
import { problemWords, readCase } from "./traffic";
import type { KeepDraft } from "./use-drafts";

const LOOK_EVERY_MS = 60_000;
/** A claim is renewed once less than this is left of its ten minutes. */
const RENEW_BELOW_MS = 6 * 60_000;
/** Whoever touched nothing for so long lets the claims lapse, so that others get the cases. */
const AWAY_MS = 9 * 60_000;

/** Renews the claims on the Desk while the person is there, and gives back those it no longer needs. */
export function useLeases(
  state: DeskState,
  dispatch: (event: DeskEvent) => void,
  keepDraft: KeepDraft,
  say: Say,
) {
  const latest = useRef(state);
  useEffect(() => {
    latest.current = state;
  }, [state]);

  useEffect(() => {
    const timer = setInterval(() => {
      if (Date.now() - lastActiveMs() > AWAY_MS) return;
      for (const { caseId, number, mine, claimExpiresAt } of latest.current.ready) {
        const leftMs = Date.parse(claimExpiresAt ?? "") - Date.now();
        if (!mine || leftMs > RENEW_BELOW_MS) continue;
        renew(caseId, dispatch).catch((error: unknown) =>
          say(`Case ${number} could not be kept in hand: ${problemWords(error)}.`, true),
        );
      }
    }, LOOK_EVERY_MS);
    return () => clearInterval(timer);
  }, [dispatch, say]);

  const { toRelease } = state;
  useEffect(() => {
    if (toRelease.length === 0) return;
    dispatch({ kind: "released", caseIds: toRelease });
    for (const caseId of toRelease) void giveBack(caseId, keepDraft);
  }, [toRelease, dispatch, keepDraft]);

  useEffect(() => {
    // The case in hand stays claimed, for a page that is only loaded anew; the ones behind it go back at once.
    const leave = () => {
      for (const { caseId } of latest.current.ready.slice(1)) {
        api("POST /api/cases/{id}/release", { id: caseId }, { keepalive: true }).catch(() => {
          // The page is gone; the lease ends by itself.
        });
      }
    };
    window.addEventListener("pagehide", leave);
    return () => {
      window.removeEventListener("pagehide", leave);
      leave();
    };
  }, []);
}

async function renew(caseId: string, dispatch: (event: DeskEvent) => void): Promise<void> {
  try {
    const answer = await api("POST /api/cases/{id}/claim", { id: caseId });
    if (answer) dispatch({ kind: "renewed", state: answer });
  } catch (error) {
    dispatch({ kind: "read_again", case: await readCase(caseId) });
    throw error;
  }
}

async function giveBack(caseId: string, keepDraft: KeepDraft): Promise<void> {
  try {
    await keepDraft(caseId);
    await api("POST /api/cases/{id}/release", { id: caseId });
  } catch {
    // Already somebody else's, or no answer: the lease ends by itself and nothing of the person's is lost.
  }
}
