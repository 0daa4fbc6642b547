"use client";
import { useMemo, useSyncExternalStore } from "react";
import { readShortcuts, type Shortcuts } from "./key-table";

const KEPT_AT = "cupel.shortcuts";
const listeners = new Set<() => void>();

function subscribe(listener: () => void): () => void {
  listeners.add(listener);
  window.addEventListener("storage", listener);
  return () => {
    listeners.delete(listener);
    window.removeEventListener("storage", listener);
  };
}

/** Shortcuts of this browser, and how to change them. */
export function useShortcuts(): [Shortcuts, (changed: Shortcuts) => void] {
  const stored = useSyncExternalStore(
    subscribe,
    () => localStorage.getItem(KEPT_AT),
    () => null,
  );
  const shortcuts = useMemo(() => readShortcuts(stored), [stored]);
  const change = (changed: Shortcuts) => {
    localStorage.setItem(KEPT_AT, JSON.stringify(changed));
    for (const listener of listeners) listener();
  };
  return [shortcuts, change];
}
