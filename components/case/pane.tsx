import { type ReactNode, type Ref, useId } from "react";

type PaneProps = { title: string; paneRef?: Ref<HTMLElement>; children: ReactNode };

/** A part of the case under a small heading. */
export function Pane({ title, paneRef, children }: PaneProps) {
  const id = useId();
  return (
    <section ref={paneRef} tabIndex={-1} aria-labelledby={id} className="min-w-0 outline-offset-4">
      <h3 id={id} className="mb-1.5 border-rule border-b pb-0.5 font-strong text-small">
        {title}
      </h3>
      <div className="flex flex-col gap-2">{children}</div>
    </section>
  );
}
