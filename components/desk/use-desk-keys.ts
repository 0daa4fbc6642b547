"use client";
import { useHotkeys } from "react-hotkeys-hook";
import { type Command, digitOf, keyTable, type Shortcuts } from "./key-table";
import { isTyping, takesEnter } from "./key-targets";

export type KeyActions = {
  move: (step: -1 | 1) => void;
  digit: (digit: number) => void;
  enter: () => void;
  escape: () => void;
  help: () => void;
  command: (command: Command) => void;
};

const plain = (event: KeyboardEvent) => !event.ctrlKey && !event.altKey && !event.metaKey;

/**
 * Keys of the case in hand. They work only while the focus is within the returned element (WCAG 2.1.4), by the place
 * of the key and not by the letter on it; a key held down counts once.
 */
export function useDeskKeys({ singleKeys, bindings }: Shortcuts, actions: KeyActions) {
  const table = keyTable(bindings);
  const act = (event: KeyboardEvent): (() => void) | null => {
    if (event.code === "Escape") return actions.escape;
    if (isTyping(event.target)) return null;
    if (event.code === "ArrowLeft") return () => actions.move(-1);
    if (event.code === "ArrowRight") return () => actions.move(1);
    if (event.code === "Enter" || event.code === "NumpadEnter") {
      return takesEnter(event.target) ? null : actions.enter;
    }
    if (!singleKeys) return null;
    if (event.key === "?") return actions.help;
    if (event.shiftKey) return null;
    const digit = digitOf(event.code);
    if (digit !== null) return () => actions.digit(digit);
    const command = table.get(event.code);
    return command ? () => actions.command(command) : null;
  };
  return useHotkeys<HTMLDivElement>(
    "*",
    (event) => {
      const action = act(event);
      if (!action) return;
      event.preventDefault();
      if (!event.repeat) action();
    },
    { enableOnFormTags: true, ignoreEventWhen: (event) => !plain(event) },
  );
}

/** Ctrl+Z (⌘Z) anywhere on the page but where someone is writing. */
export function useUndoKey(undo: () => void) {
  useHotkeys("mod+z", undo, {
    useKey: true,
    preventDefault: true,
    enableOnFormTags: true,
    ignoreEventWhen: (event) => event.repeat || isTyping(event.target),
  });
}
