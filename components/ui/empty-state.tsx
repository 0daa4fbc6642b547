import type { ReactNode } from "react";

type EmptyStateProps = { title: ReactNode; children?: ReactNode };

/** Nothing here: why, and what to do next. */
export function EmptyState({ title, children }: EmptyStateProps) {
  return (
    <div className="border border-rule border-dashed px-4 py-8 text-center">
      <p className="font-strong">{title}</p>
      {children && <div className="mx-auto mt-1 max-w-[52ch] text-soft">{children}</div>}
    </div>
  );
}
