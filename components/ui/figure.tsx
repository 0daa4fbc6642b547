import type { ReactNode } from "react";

type FigureProps = {
  label: ReactNode;
  value: ReactNode;
  /** Beside the number: "EUR", "cases", "%". */
  unit?: string;
  /** Beneath: the change, the interval, what it leaves out. */
  note?: ReactNode;
};

/** One number that matters, with its name and unit. Put several into a FigureRow. */
export function Figure({ label, value, unit, note }: FigureProps) {
  return (
    <div className="min-w-36 flex-1 border-l border-rule py-0.5 pl-3">
      <dt className="text-small text-soft">{label}</dt>
      <dd className="font-mono text-figure tabular-nums">
        {value}
        {unit && <span className="ml-1.5 inline-block font-sans text-small text-soft">{unit}</span>}
      </dd>
      {note && <dd className="text-small text-soft">{note}</dd>}
    </div>
  );
}

export function FigureRow({ children }: { children: ReactNode }) {
  return <dl className="flex flex-wrap gap-x-4 gap-y-5 pb-5">{children}</dl>;
}
