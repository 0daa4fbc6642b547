import type { WithoutSignal } from "@/lib/cases/schema";
import { percentOf, signedDecibans } from "../ui/probability";

type WithoutSignalsProps = {
  /** The strongest first; null where the scorer that gave the score is not at hand. */
  lines: readonly WithoutSignal[] | null;
  /** The score is one of the past. */
  past?: boolean;
};

const WORDS = {
  now: {
    title: "What would change this",
    some: "Where it would stand without one signal, the rest as they are.",
  },
  past: {
    title: "What would have changed it then",
    some: "Where it would have stood without one signal, the rest as they were.",
  },
};

/** What would change the score most: where it would stand without one signal. */
export function WithoutSignals({ lines, past = false }: WithoutSignalsProps) {
  if (!lines) return null;
  const { title, some } = WORDS[past ? "past" : "now"];
  return (
    <div className="text-small">
      <p>
        <span className="font-strong">{title}</span>
        <span className="text-soft">
          {lines.length > 0
            ? ` ${some} Signals act together, so these do not add up.`
            : " No single signal: none speaks for anything by itself."}
        </span>
      </p>
      {lines.length > 0 && (
        <ul className="grid gap-x-10 lg:grid-cols-[repeat(3,auto)] lg:justify-start">
          {lines.map((line) => (
            <li key={line.key}>
              Without <span className="font-strong">{line.name}</span>:{" "}
              <span className="whitespace-nowrap">
                <span className="figures">{signedDecibans(line.totalDecibans)}</span>
                <span className="text-soft"> decibans, </span>
                <span className="figures">{percentOf(line.probability)}</span>
                <span className="text-soft">{"\u202f"}%</span>
              </span>
            </li>
          ))}
        </ul>
      )}
    </div>
  );
}
