import type { WithoutSignal } from "@/lib/cases/schema";
import { percentOf, signedDecibans } from "../ui/probability";

type WithoutSignalsProps = {
  /** The strongest first; null where the scorer that gave the score is not at hand. */
  lines: readonly WithoutSignal[] | null;
  title?: string;
};

/** What would change the score most: where it would stand without one signal. */
export function WithoutSignals({ lines, title = "What would change this" }: WithoutSignalsProps) {
  if (!lines) return null;
  return (
    <div className="text-small">
      <p>
        <span className="font-strong">{title}</span>
        <span className="text-soft">
          {lines.length > 0
            ? " One signal away, the rest as they are. Signals act together, so these do not add up."
            : " No single signal: none speaks for anything by itself."}
        </span>
      </p>
      {lines.length > 0 && (
        <ul className="grid gap-x-6 lg:grid-cols-3">
          {lines.map((line) => (
            <li key={line.key}>
              Without <span className="font-strong">{line.name}</span> it would stand at{" "}
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
