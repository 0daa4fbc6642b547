import type { EvidenceView, SignalEvidence } from "@/lib/cases/schema";

export type EvidenceRow = {
  key: string;
  name: string;
  reading: string | null;
  explanation: string | null;
  decibans: number;
  kind: "base_rate" | "signal" | "rest" | "little_experience";
};

const asRow = (signal: SignalEvidence): EvidenceRow => ({ ...signal, kind: "signal" });

/**
 * The bars of the balance: base rate, the signals by weight, what the rest of them add together, and what is held back
 * for little experience. The rows always add up to the total.
 */
export function evidenceRows(evidence: EvidenceView, most: number): EvidenceRow[] {
  const speaking = evidence.signals.filter((signal) => signal.available && signal.decibans !== 0);
  const byWeight = speaking.toSorted((a, b) => Math.abs(b.decibans) - Math.abs(a.decibans));
  const shown = byWeight.length <= most ? byWeight : byWeight.slice(0, most - 1);
  const rest = byWeight.slice(shown.length);
  const rows: EvidenceRow[] = [
    {
      key: "base_rate",
      name: "Base rate",
      reading: null,
      explanation: "Odds before any signal is read, from the policy",
      decibans: evidence.baseRateDecibans,
      kind: "base_rate",
    },
    ...shown.map(asRow),
  ];
  if (rest.length > 0) {
    rows.push({
      key: "rest",
      name: `${rest.length} more signals, together`,
      reading: null,
      explanation: null,
      decibans: rest.reduce((sum, signal) => sum + signal.decibans, 0),
      kind: "rest",
    });
  }
  if (evidence.littleExperienceDecibans !== 0) {
    rows.push({
      key: "little_experience",
      name: "Little experience with this pattern",
      reading: null,
      explanation: "Held back, because the scorer has seen few cases like this one",
      decibans: evidence.littleExperienceDecibans,
      kind: "little_experience",
    });
  }
  return rows;
}

/** Signals that had nothing to read in this transaction. */
export function silentSignals(evidence: EvidenceView): SignalEvidence[] {
  return evidence.signals.filter((signal) => !signal.available);
}

/** A line of the balance in words and figures. */
export type EvidenceLine = { name: string; reading: string; explanation: string; decibans: number };

/** All that the balance is drawn from: every signal, also those that say nothing, the total and the policy's two lines. */
export function evidenceLines(evidence: EvidenceView): EvidenceLine[] {
  const weighed = evidenceRows(evidence, evidence.signals.length).map((row) => ({
    name: row.name,
    reading: row.reading ?? "",
    explanation: row.explanation ?? "",
    decibans: row.decibans,
  }));
  const quiet = evidence.signals
    .filter((signal) => !signal.available || signal.decibans === 0)
    .map(({ name, reading, explanation, available }) => ({
      name,
      reading: available ? reading : "not available",
      explanation,
      decibans: 0,
    }));
  const line = (name: string, explanation: string, decibans: number) => ({
    name,
    reading: "",
    explanation,
    decibans,
  });
  return [
    ...weighed,
    ...quiet,
    line("Total", "Sum of the lines above", evidence.totalDecibans),
    line("Review from", "Line of the policy", evidence.reviewDecibans),
    line("Hold from", "Line of the policy", evidence.holdDecibans),
  ];
}
