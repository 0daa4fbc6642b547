"use client";
import { type FormEvent, type ReactNode, useId } from "react";
import { Button } from "./button";
import { Dialog } from "./dialog";

type FormDialogProps = {
  title: ReactNode;
  description?: ReactNode;
  /** On the button that sends. */
  verb: string;
  /** On the button that leaves things as they are. */
  wayOut?: string;
  /** It has been sent, and the answer is not here yet. */
  busy: boolean;
  wide?: boolean;
  onSend: (form: FormData) => void;
  onClose: () => void;
  children: ReactNode;
};

/** A dialog that asks for something and sends it: Enter sends too, and nothing is sent twice. */
export function FormDialog(props: FormDialogProps) {
  const {
    title,
    description,
    verb,
    wayOut = "Cancel",
    busy,
    wide = false,
    onSend,
    onClose,
    children,
  } = props;
  const formId = useId();
  const send = (event: FormEvent<HTMLFormElement>) => {
    event.preventDefault();
    if (!busy) onSend(new FormData(event.currentTarget));
  };
  return (
    <Dialog
      open
      onOpenChange={onClose}
      title={title}
      description={description}
      wide={wide}
      footer={
        <>
          <Button onClick={onClose}>{wayOut}</Button>
          <Button type="submit" form={formId} look="action" busy={busy}>
            {verb}
          </Button>
        </>
      }
    >
      <form id={formId} onSubmit={send} className="flex flex-col gap-4">
        {children}
      </form>
    </Dialog>
  );
}
