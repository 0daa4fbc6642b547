import type { RankingView } from "./ranking/view";
import type { CaseFacts } from "./ranking/waiting-cases";
import { type Asker, isTakeable } from "./rules";

type Wanted = {
  asker: Asker;
  now: Date;
  /** Ids not to be given. */
  skip: ReadonlySet<string>;
  /** At most so many. */
  limit: number;
};

/** Holds about to expire that this person may take, in order. */
export function expiringCandidates(view: RankingView, wanted: Wanted): string[] {
  return firstWanted(ranked(view, 0, view.expiring), wanted);
}

/** The other cases in order, those assigned to the person before those that are anybody's. */
export function rankedCandidates(view: RankingView, wanted: Wanted): string[] {
  const assigned = firstWanted(view.assignedTo(wanted.asker.personId), wanted);
  const skip = new Set([...wanted.skip, ...assigned]);
  const limit = wanted.limit - assigned.length;
  return [...assigned, ...firstWanted(ranked(view, view.expiring, view.size), { ...wanted, skip, limit })];
}

/** Cases past their deadline, the longest overdue first. */
export function overdueCandidates(view: RankingView, wanted: Wanted): string[] {
  const found: { id: string; dueMs: number }[] = [];
  const isFull = () => found.length === wanted.limit;
  const latestMs = () => (isFull() ? (found.at(-1)?.dueMs ?? 0) : wanted.now.getTime());
  for (const facts of view.dueBefore(latestMs)) {
    if (!isWanted(facts, wanted)) continue;
    const dueMs = facts.dueAt.getTime();
    const behind = found.findIndex((other) => other.dueMs > dueMs);
    if (isFull()) found.pop();
    found.splice(behind < 0 ? found.length : behind, 0, { id: facts.id, dueMs });
  }
  return found.map(({ id }) => id);
}

/** Samples in order of arrival: by score, the share handed out would not be a random one. */
export function sampleCandidates(view: RankingView, wanted: Wanted): string[] {
  return firstWanted(view.samples(), wanted);
}

function* ranked(view: RankingView, from: number, to: number): Iterable<CaseFacts> {
  for (let index = from; index < to; index++) yield view.caseAt(index);
}

function firstWanted(cases: Iterable<CaseFacts>, wanted: Wanted): string[] {
  const found: string[] = [];
  if (wanted.limit === 0) return found;
  for (const facts of cases) {
    if (!isWanted(facts, wanted)) continue;
    found.push(facts.id);
    if (found.length === wanted.limit) break;
  }
  return found;
}

const isWanted = (facts: CaseFacts, { asker, now, skip }: Wanted) =>
  !skip.has(facts.id) && isTakeable(facts, asker, now);
