type ProgressBarProps = {
  /** What makes progress; read out with the value. */
  label: string;
  /** Between 0 and 100. */
  percent: number;
  /** The value in words: "12 MB of 30 MB". */
  says: string;
};

export function ProgressBar({ label, percent, says }: ProgressBarProps) {
  return (
    <div className="max-w-xl">
      <div
        role="progressbar"
        aria-label={label}
        aria-valuenow={percent}
        aria-valuemin={0}
        aria-valuemax={100}
        aria-valuetext={says}
        className="h-3 border border-edge bg-raised"
      >
        <div className="h-full bg-accent motion-safe:transition-[width]" style={{ width: `${percent}%` }} />
      </div>
      <p className="mt-1 text-small text-soft tabular-nums">{says}</p>
    </div>
  );
}
