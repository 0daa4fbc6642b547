"use client";
import { EscalateDialog } from "./escalate-dialog";
import { ShortcutsDialog } from "./shortcuts-dialog";
import { UndoDialog } from "./undo-dialog";
import type { useCaseCommands } from "./use-case-commands";
import type { Desk } from "./use-desk";
import { WaitDialog } from "./wait-dialog";

type DeskDialogsProps = {
  desk: Desk;
  commands: ReturnType<typeof useCaseCommands>;
  note: string;
  onNote: (note: string) => void;
  wish: () => void;
};

/** What a key only begins: each asks for a word or a confirmation before anything is sent. */
export function DeskDialogs({ desk, commands, note, onNote, wish }: DeskDialogsProps) {
  const { dialog, setDialog, leaveWith } = commands;
  const close = () => setDialog(null);
  const number = desk.hand?.number ?? 0;
  return (
    <>
      {dialog === "escalate" && (
        <EscalateDialog
          caseNumber={number}
          note={note}
          onNote={onNote}
          onClose={close}
          onEscalate={(text) => leaveWith({ kind: "escalation", note: text })}
        />
      )}
      {dialog === "wait" && (
        <WaitDialog
          caseNumber={number}
          note={note}
          onNote={onNote}
          onClose={close}
          onWait={(until, text) => leaveWith({ kind: "waiting", until, note: text })}
        />
      )}
      <ShortcutsDialog
        open={dialog === "shortcuts"}
        onClose={close}
        shortcuts={commands.shortcuts}
        onChange={commands.setShortcuts}
      />
      <UndoDialog
        sent={dialog !== null && typeof dialog === "object" ? dialog : null}
        onClose={close}
        onUndo={(sent) => {
          wish();
          desk.undo(sent);
        }}
      />
    </>
  );
}
