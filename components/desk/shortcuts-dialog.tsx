"use client";
import { type KeyboardEvent, useState } from "react";
import { Button } from "../ui/button";
import { Checkbox } from "../ui/choice";
import { Dialog } from "../ui/dialog";
import {
  COMMANDS,
  type Command,
  DEFAULT_SHORTCUTS,
  KeyTaken,
  keyName,
  rebind,
  type Shortcuts,
} from "./key-table";
import { useKeyboardLayout } from "./use-keyboard-layout";

const FIXED_KEYS: readonly (readonly [string, string])[] = [
  ["← →", "Move the marker: legitimate to the left, fraudulent to the right"],
  ["1 – 9", "Typology, on a fraudulent stop"],
  ["Enter", "Commit the finding"],
  ["Ctrl+Z", "Name the decision that would be taken back; Enter takes it back"],
  ["Esc", "Back out: of a note, the links, the list, and last of the finding"],
  ["?", "This list"],
];

type ShortcutsDialogProps = {
  open: boolean;
  onClose: () => void;
  shortcuts: Shortcuts;
  onChange: (changed: Shortcuts) => void;
};

export function ShortcutsDialog({ open, onClose, shortcuts, onChange }: ShortcutsDialogProps) {
  return (
    <Dialog
      open={open}
      onOpenChange={onClose}
      wide
      title="Shortcuts"
      description="Single keys work while the focus is on the case, by their place on the keyboard. Kept in this browser."
      footer={
        <>
          <Button onClick={() => onChange(DEFAULT_SHORTCUTS)}>Back to the defaults</Button>
          <Button look="action" onClick={onClose}>
            Done
          </Button>
        </>
      }
    >
      <div className="grid gap-x-8 gap-y-4 sm:grid-cols-2">
        <dl className="grid grid-cols-[auto_1fr] content-start gap-x-3 gap-y-1.5">
          {FIXED_KEYS.map(([key, does]) => (
            <div key={key} className="contents">
              <dt>
                <kbd>{key}</kbd>
              </dt>
              <dd className="text-small">{does}</dd>
            </div>
          ))}
        </dl>
        <div className="flex flex-col gap-3">
          <Checkbox
            label="Single keys on"
            hint="When off, arrows, Enter, Escape and Ctrl+Z still work"
            checked={shortcuts.singleKeys}
            onChange={(event) => onChange({ ...shortcuts, singleKeys: event.target.checked })}
          />
          <KeyBindings shortcuts={shortcuts} onChange={onChange} />
        </div>
      </div>
    </Dialog>
  );
}

function KeyBindings({ shortcuts, onChange }: Pick<ShortcutsDialogProps, "shortcuts" | "onChange">) {
  const layout = useKeyboardLayout();
  const [asking, setAsking] = useState<Command | null>(null);
  const [problem, setProblem] = useState<string | null>(null);
  const take = (command: Command) => (event: KeyboardEvent) => {
    if (asking !== command || event.code === "Tab") return;
    event.preventDefault();
    event.stopPropagation();
    if (event.code === "Escape") return setAsking(null);
    try {
      onChange({ ...shortcuts, bindings: rebind(shortcuts.bindings, command, event.code) });
      setProblem(null);
      setAsking(null);
    } catch (error) {
      if (!(error instanceof KeyTaken)) throw error;
      setProblem(`${error.message}. Press another key, or Escape.`);
    }
  };
  return (
    <>
      <dl className="grid grid-cols-[auto_1fr] gap-x-3 gap-y-1">
        {(Object.keys(COMMANDS) as Command[]).map((command) => (
          <div key={command} className="contents">
            <dt>
              <Button
                small
                className="w-16"
                aria-label={`${COMMANDS[command]}: ${keyName(shortcuts.bindings[command], layout)}. Press to change`}
                onClick={() => setAsking(command)}
                onKeyDown={take(command)}
                onBlur={() => setAsking(null)}
              >
                {asking === command ? "press" : keyName(shortcuts.bindings[command], layout)}
              </Button>
            </dt>
            <dd className="self-center text-small">{COMMANDS[command]}</dd>
          </div>
        ))}
      </dl>
      <p role="status" className="min-h-4.5 text-small text-error">
        {problem}
      </p>
    </>
  );
}
