/** Facts of a trail entry as they were written: references, codes and numbers. */
export type Facts = Record<string, unknown>;

const plain = (code: unknown) => (typeof code === "string" ? code.replaceAll("_", " ") : null);

/** What an act says beyond its name, in plain words; null where the name says it all. */
export function detailOf(
  act: string,
  facts: Facts,
  nameOf: (personId: unknown) => string | null,
): string | null {
  switch (act) {
    case "case.decided":
      return joined(plain(facts.verdict), plain(facts.typology));
    case "decision.corrected":
      return joined(
        `${plain(facts.from) ?? "no verdict"} became ${plain(facts.verdict)}`,
        plain(facts.typology),
      );
    case "decision.undone":
      return plain(facts.verdict);
    case "case.assigned": {
      const to = nameOf(facts.to);
      const ended = nameOf(facts.claimEndedOf);
      return joined(to && `to ${to}`, ended && `the claim of ${ended} ended`);
    }
    case "case.freed": {
      const from = nameOf(facts.assignedFrom);
      const ended = nameOf(facts.claimEndedOf);
      return joined(from && `was assigned to ${from}`, ended && `the claim of ${ended} ended`);
    }
    case "case.claimed":
    case "case.handed_out": {
      const lapsed = nameOf(facts.lapsedClaimOf);
      return joined(SHARE_WORDS[String(facts.share)] ?? null, lapsed && `the claim of ${lapsed} had run out`);
    }
    case "case.released":
    case "case.lease_expired": {
      const holder = nameOf(facts.claimOf);
      return holder && `claim of ${holder}`;
    }
    case "case.set_aside":
      return typeof facts.until === "string" ? `until ${inUtc(facts.until)}` : null;
    default:
      return null;
  }
}

const SHARE_WORDS: Readonly<Record<string, string>> = {
  overdue: "from the share kept for overdue cases",
  sample: "from the share kept for random samples",
  expiring: "its hold is about to end",
};

const inUtc = (instant: string) => `${instant.slice(0, 16).replace("T", " ")} UTC`;

function joined(...parts: (string | null | false | "")[]): string | null {
  return parts.filter(Boolean).join(", ") || null;
}
