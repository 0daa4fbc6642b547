"use client";
import { useState } from "react";
import { Button } from "../ui/button";
import { Dialog } from "../ui/dialog";

type ShownOnceProps = {
  title: string;
  says: string | null;
  /** Null while there is nothing to show. */
  secret: string | null;
  onClose: () => void;
};

/** A secret that the server will not show again. */
export function ShownOnce({ title, says, secret, onClose }: ShownOnceProps) {
  const [copied, setCopied] = useState<string | null>(null);
  const copy = async (text: string) => {
    await navigator.clipboard.writeText(text);
    setCopied(text);
  };
  return (
    <Dialog
      open={secret !== null}
      onOpenChange={onClose}
      mustAnswer
      title={title}
      description={`${says ?? ""} It is not shown again.`}
      footer={
        <>
          <Button onClick={() => secret && void copy(secret)}>Copy</Button>
          <Button look="action" onClick={onClose}>
            I have it
          </Button>
        </>
      }
    >
      <p className="figures rounded-edge border border-edge bg-sunk px-3 py-2 break-all select-all">
        {secret}
      </p>
      <p role="status" className="mt-1 min-h-5 text-small text-soft">
        {copied !== null && copied === secret ? "Copied" : ""}
      </p>
    </Dialog>
  );
}
