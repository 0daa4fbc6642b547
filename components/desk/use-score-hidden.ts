"use client";
import { useSyncExternalStore } from "react";

const KEPT_AT = "cupel.score-hidden";
const listeners = new Set<() => void>();

function subscribe(listener: () => void): () => void {
  listeners.add(listener);
  return () => listeners.delete(listener);
}

/** Whether this person would rather weigh a case without its score; kept in this browser. */
export function useScoreHidden(): [boolean, (hidden: boolean) => void] {
  const hidden = useSyncExternalStore(
    subscribe,
    () => localStorage.getItem(KEPT_AT) === "yes",
    () => false,
  );
  const setHidden = (now: boolean) => {
    localStorage.setItem(KEPT_AT, now ? "yes" : "no");
    for (const listener of listeners) listener();
  };
  return [hidden, setHidden];
}
