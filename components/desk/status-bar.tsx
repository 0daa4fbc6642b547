"use client";
import { Button } from "../ui/button";
import type { QuietLine } from "./quiet-line";

type StatusBarProps = {
  line: QuietLine;
  sending: number;
  live: boolean;
  paused: boolean;
  onPause: (paused: boolean) => void;
};

/** The foot of the Desk: what happened last, and whether others' work arrives by itself. */
export function StatusBar({ line, sending, live, paused, onPause }: StatusBarProps) {
  return (
    <div className="sticky bottom-0 flex min-h-8 flex-wrap items-center gap-x-4 border-t border-rule bg-paper px-4 text-small sm:px-6">
      <p
        role="status"
        aria-live="polite"
        className={`min-w-0 flex-1 py-1 ${line.failed ? "text-error" : ""}`}
      >
        <span key={line.count}>
          {line.failed && <span aria-hidden="true">✕ </span>}
          {line.text}
        </span>
      </p>
      {sending > 0 && <span className="text-soft">{sending} on the way</span>}
      <span className="text-soft">{paused ? "Live updates paused" : live ? "Live" : "Connecting"}</span>
      <Button look="quiet" small className="px-0" onClick={() => onPause(!paused)}>
        {paused ? "Resume live updates" : "Pause live updates"}
      </Button>
    </div>
  );
}
