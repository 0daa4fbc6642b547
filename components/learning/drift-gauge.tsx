import type { DriftView } from "@/lib/learning/drift-schema";

type DriftGaugeProps = {
  name: string;
  means: string;
  gauge: DriftView["loss"];
  /** Beneath the ends: which way is which. */
  ends: readonly [low: string, high: string];
};

/** A statistic on its own small balance: zero in the middle, the lines of its band at the ends. */
export function DriftGauge({ name, means, gauge: { value, line }, ends }: DriftGaugeProps) {
  const inside = value !== null && Math.abs(value) < line;
  return (
    <div>
      <h3 className="font-strong">{name}</h3>
      <p className="text-small text-soft">{means}</p>
      <p className="mt-2">
        {value === null ? (
          "Too few labels yet"
        ) : (
          <>
            <span className="figures">{signed(value)}</span>
            <span className="text-soft">
              {" "}
              of <span className="figures">±{line.toFixed(1)}</span>
            </span>{" "}
            {inside ? "✓ in its band" : "▲ outside its band"}
          </>
        )}
      </p>
      <svg aria-hidden="true" viewBox="0 0 1000 16" preserveAspectRatio="none" className="mt-1 h-4 w-full">
        <path d="M0 11H1000" vectorEffect="non-scaling-stroke" className="stroke-edge" />
        <path d="M1 4V16M999 4V16M500 8V14" vectorEffect="non-scaling-stroke" className="stroke-ink" />
        {value !== null && <Pointer share={Math.max(-1, Math.min(1, value / line))} />}
      </svg>
      <div aria-hidden="true" className="flex justify-between text-small text-soft">
        <span>{ends[0]}</span>
        <span>{ends[1]}</span>
      </div>
    </div>
  );
}

function Pointer({ share }: { share: number }) {
  const at = 500 + share * 496;
  return (
    <>
      <rect x={Math.min(500, at)} y="5" width={Math.abs(at - 500)} height="4" className="fill-soft" />
      <path d={`M${at} 1V12`} vectorEffect="non-scaling-stroke" strokeWidth="3" className="stroke-ink" />
    </>
  );
}

function signed(value: number): string {
  const text = Math.abs(value).toFixed(1);
  if (text === "0.0") return text;
  return `${value > 0 ? "+" : "−"}${text}`;
}
