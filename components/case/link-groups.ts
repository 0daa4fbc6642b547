import type { EvidenceView, LinkedCase, SignalEvidence } from "@/lib/cases/schema";

export type LinkGroup = {
  by: LinkedCase["by"];
  /** Signals that read this account, card, device or counterparty and say something, heaviest first. */
  signals: SignalEvidence[];
  links: LinkedCase[];
};

const ORDER = ["account", "card", "device", "counterparty"] as const;

/** What links to the case, under the signals that look at the same account, card, device or counterparty. */
export function linkGroups(links: readonly LinkedCase[], evidence: EvidenceView | null): LinkGroup[] {
  return ORDER.flatMap((by) => {
    const found = links.filter((link) => link.by === by);
    if (found.length === 0) return [];
    const signals = (evidence?.signals ?? [])
      .filter((signal) => signal.available && signal.decibans !== 0 && reads(signal, by))
      .toSorted((a, b) => Math.abs(b.decibans) - Math.abs(a.decibans));
    return [{ by, signals, links: found }];
  });
}

function reads(signal: SignalEvidence, by: string): boolean {
  return signal.key.split(/[^a-z0-9]+/i).includes(by);
}
