/** 0.0314 → "3.1 %"; never rounds a possibility away to 0 or 100. */
export function percentOf(probability: number): string {
  const percent = probability * 100;
  if (percent > 0 && percent < 0.1) return "< 0.1";
  if (percent < 100 && percent > 99.9) return "> 99.9";
  return percent.toFixed(1);
}

export function Probability({ probability }: { probability: number }) {
  return (
    <span className="figures whitespace-nowrap">
      {percentOf(probability)}
      <span className="text-soft">{"\u202f"}%</span>
    </span>
  );
}

/** Evidence with its sign: 12.34 → "+12.3", −0.02 → "0.0". */
export function signedDecibans(decibans: number): string {
  const text = Math.abs(decibans).toFixed(1);
  if (text === "0.0") return text;
  return `${decibans > 0 ? "+" : "−"}${text}`;
}

/** Evidence in decibans; the sign says which way it speaks, the colour repeats it. */
export function Decibans({ decibans }: { decibans: number }) {
  const text = signedDecibans(decibans);
  const tone = text === "0.0" ? "" : decibans > 0 ? "text-ochre-ink" : "text-verdigris-ink";
  return <span className={`figures whitespace-nowrap ${tone}`}>{text}</span>;
}
