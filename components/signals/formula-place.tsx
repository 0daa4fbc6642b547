import type { SignalPreview } from "@/lib/signals/own-schema";

type FormulaPlaceProps = { formula: string; problem: NonNullable<SignalPreview["problem"]> };

/** Shows where in the formula a mistake lies: marked, and named by its line and character for who cannot see that. */
export function FormulaPlace({ formula, problem }: FormulaPlaceProps) {
  if (problem.at === null) return null;
  const at = Math.min(problem.at, formula.length);
  const lineStart = formula.lastIndexOf("\n", at - 1) + 1;
  const nextBreak = formula.indexOf("\n", at);
  const line = formula.slice(lineStart, nextBreak < 0 ? formula.length : nextBreak);
  const from = at - lineStart;
  const to = Math.max(from + 1, Math.min(line.length, from + problem.length));
  const lineNumber = formula.slice(0, at).split("\n").length;
  return (
    <p className="text-small">
      <span className="text-soft">
        Line {lineNumber}, character {from + 1}:{" "}
      </span>
      <code className="font-mono break-words whitespace-pre-wrap">
        {line.slice(0, from)}
        <mark className="border-b-2 border-error bg-transparent font-strong text-error">
          {line.slice(from, to) || "\u2038"}
        </mark>
        {line.slice(to)}
      </code>
    </p>
  );
}
