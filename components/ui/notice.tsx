import type { ReactNode } from "react";

type NoticeProps = {
  /** `status` says what happened, `error` what failed and what to do, `caution` what to bear in mind. */
  kind?: "status" | "error" | "caution";
  title?: ReactNode;
  children?: ReactNode;
  className?: string;
};

const LOOKS = {
  status: { frame: "border-l-accent", mark: "", role: "status" },
  error: { frame: "border-l-error", mark: "✕", role: "alert" },
  caution: { frame: "border-l-edge", mark: "", role: undefined },
} as const;

export function Notice({ kind = "status", title, children, className = "" }: NoticeProps) {
  const { frame, mark, role } = LOOKS[kind];
  return (
    <div role={role} className={`border-l-4 bg-raised px-3 py-2 ${frame} ${className}`}>
      {title && (
        <p className={`font-strong ${kind === "error" ? "text-error" : ""}`}>
          {mark && <span aria-hidden="true">{mark} </span>}
          {title}
        </p>
      )}
      {children && <div className="text-body">{children}</div>}
    </div>
  );
}
