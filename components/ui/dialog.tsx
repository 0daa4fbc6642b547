"use client";
import * as Radix from "@radix-ui/react-dialog";
import { type ReactNode, useRef } from "react";

type DialogProps = {
  open: boolean;
  onOpenChange: (open: boolean) => void;
  title: ReactNode;
  description?: ReactNode;
  children?: ReactNode;
  /** Buttons, the one that acts last. */
  footer?: ReactNode;
  /** Refuse to close by Escape or a press outside: something must be answered. */
  mustAnswer?: boolean;
  wide?: boolean;
  /** Hides the page beneath, for when nobody may be looking at it. */
  opaque?: boolean;
};

/** Marks the control that has the focus when the dialog opens, where that is not the first. */
const FIRST = "[data-first-focus]";

export function Dialog(props: DialogProps) {
  const { open, onOpenChange, title, description, children, footer } = props;
  const { mustAnswer = false, wide = false, opaque = false } = props;
  const before = useRef<Element | null>(null);
  const hold = mustAnswer ? (event: Event) => event.preventDefault() : undefined;
  return (
    <Radix.Root open={open} onOpenChange={onOpenChange}>
      <Radix.Portal>
        <Radix.Overlay className={`fixed inset-0 z-40 ${opaque ? "bg-sunk" : "bg-[rgb(20_18_14/0.45)]"}`} />
        <Radix.Content
          {...(description === undefined && { "aria-describedby": undefined })}
          onOpenAutoFocus={(event) => {
            // Not by autoFocus, which moves the focus before anybody has noted where it came from.
            before.current = document.activeElement;
            const first =
              event.currentTarget instanceof HTMLElement && event.currentTarget.querySelector(FIRST);
            if (!(first instanceof HTMLElement)) return;
            event.preventDefault();
            first.focus();
          }}
          onCloseAutoFocus={(event) => {
            // These dialogs are opened by keys as often as by buttons, so there is no trigger to go back to.
            event.preventDefault();
            if (before.current instanceof HTMLElement) before.current.focus({ preventScroll: true });
          }}
          onEscapeKeyDown={hold}
          onPointerDownOutside={hold}
          className={`fixed top-[12vh] left-1/2 z-50 max-h-[80vh] w-[calc(100vw-2rem)] -translate-x-1/2 overflow-y-auto rounded-edge border border-edge bg-paper p-5 shadow-lifted ${wide ? "max-w-3xl" : "max-w-lg"}`}
        >
          <Radix.Title className="text-title font-strong">{title}</Radix.Title>
          {description !== undefined && (
            <Radix.Description className="mt-1 text-soft">{description}</Radix.Description>
          )}
          {children && <div className="mt-4">{children}</div>}
          {footer && <div className="mt-5 flex flex-wrap justify-end gap-2">{footer}</div>}
        </Radix.Content>
      </Radix.Portal>
    </Radix.Root>
  );
}
