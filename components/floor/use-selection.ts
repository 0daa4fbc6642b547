"use client";
import { type KeyboardEvent, type MouseEvent, useRef, useState } from "react";

/**
 * Rows chosen in a list: a click or Space toggles one, with Shift all from the last one on; arrow keys move along
 * the checkboxes, with Shift they choose on the way; Ctrl+A chooses all shown.
 */
export function useSelection(shown: readonly string[]) {
  const [chosen, setChosen] = useState<ReadonlySet<string>>(new Set());
  const anchor = useRef<string | null>(null);
  // What left the list is no longer chosen, whoever moved it.
  const selected = shown.filter((id) => chosen.has(id));

  const choose = (ids: readonly string[], on: boolean) => {
    const next = new Set(selected);
    for (const id of ids) {
      if (on) next.add(id);
      else next.delete(id);
    }
    setChosen(next);
  };
  const toggle = (id: string, event: MouseEvent<HTMLInputElement>) => {
    const on = event.currentTarget.checked;
    choose(event.shiftKey ? between(shown, anchor.current ?? id, id) : [id], on);
    anchor.current = id;
  };
  const onKeyDown = (event: KeyboardEvent<HTMLElement>) => {
    const box = event.target;
    if (!(box instanceof HTMLInputElement) || box.dataset.row === undefined) return;
    if ((event.ctrlKey || event.metaKey) && event.key === "a") {
      event.preventDefault();
      setChosen(new Set(shown));
      return;
    }
    const step = { ArrowDown: 1, ArrowUp: -1 }[event.key];
    const next = step === undefined ? undefined : shown[shown.indexOf(box.dataset.row) + step];
    if (next === undefined) return;
    event.preventDefault();
    event.currentTarget.querySelector<HTMLInputElement>(`[data-row="${next}"]`)?.focus();
    if (event.shiftKey) choose([box.dataset.row, next], true);
  };
  const toggleAll = () => setChosen(selected.length === shown.length ? new Set() : new Set(shown));
  return { selected, toggle, toggleAll, clear: () => setChosen(new Set()), onKeyDown };
}

export type Selection = ReturnType<typeof useSelection>;

/** The ids from one to the other, in the order of the list, both included. */
function between(shown: readonly string[], one: string, other: string): string[] {
  const [from, to] = [shown.indexOf(one), shown.indexOf(other)].sort((a, b) => a - b) as [number, number];
  return from < 0 ? [other] : shown.slice(from, to + 1);
}
