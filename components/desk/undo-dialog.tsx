"use client";
import { Amount } from "../ui/amount";
import { Button } from "../ui/button";
import { Dialog } from "../ui/dialog";
import { Time } from "../ui/time";
import { actLine } from "./act-line";
import type { Sent } from "./desk-state";

type UndoDialogProps = { sent: Sent | null; onClose: () => void; onUndo: (sent: Sent) => void };

/** Names the decision that would be taken back; Enter takes it back, Escape leaves it. */
export function UndoDialog({ sent, onClose, onUndo }: UndoDialogProps) {
  if (!sent) return null;
  const { number, transaction } = sent.case;
  const confirm = () => {
    onUndo(sent);
    onClose();
  };
  return (
    <Dialog
      open
      onOpenChange={onClose}
      title={`Take back the decision on case ${number}?`}
      description={
        <>
          Case {number}, <Amount amount={transaction.amount} currency={transaction.currency} />, is{" "}
          {actLine(sent.act)}. The scorer will be as if it had never learned from it.
        </>
      }
      footer={
        <>
          <Button onClick={onClose}>Leave it</Button>
          <Button look="action" data-first-focus="" onClick={confirm}>
            Take it back
          </Button>
        </>
      }
    >
      {sent.undoUntil && (
        <p className="text-small text-soft">
          Possible until <Time at={sent.undoUntil} as="short" />.
        </p>
      )}
    </Dialog>
  );
}
