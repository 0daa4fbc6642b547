import type { RankingView } from "./ranking/view";
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
  const found: string[] = [];
  for (let index = 0; index < view.expiring && found.length < wanted.limit; index++) {
    const facts = view.caseAt(index);
    if (isWanted(facts, wanted)) found.push(facts.id);
  }
  return found;
}

/** The other cases in order, those assigned to the person before those that are anybody's. */
export function rankedCandidates(view: RankingView, wanted: Wanted): string[] {
  const assigned: string[] = [];
  const anybodys: string[] = [];
  for (let index = view.expiring; index < view.size && assigned.length < wanted.limit; index++) {
    const facts = view.caseAt(index);
    if (facts.assignedTo === null && anybodys.length >= wanted.limit) continue;
    if (!isWanted(facts, wanted)) continue;
    (facts.assignedTo === null ? anybodys : assigned).push(facts.id);
  }
  return [...assigned, ...anybodys].slice(0, wanted.limit);
}

/** Cases past their deadline, the longest overdue first. */
export function overdueCandidates(view: RankingView, wanted: Wanted): string[] {
  const nowMs = wanted.now.getTime();
  const found: { id: string; dueMs: number }[] = [];
  for (let position = 0; position < view.size; position++) {
    const facts = view.arrivedAt(position);
    const dueMs = facts.dueAt.getTime();
    const last = found.at(-1);
    if (dueMs >= nowMs || (found.length >= wanted.limit && last && dueMs >= last.dueMs)) continue;
    if (!isWanted(facts, wanted)) continue;
    const behind = found.findIndex((other) => other.dueMs > dueMs);
    found.splice(behind < 0 ? found.length : behind, 0, { id: facts.id, dueMs });
    if (found.length > wanted.limit) found.pop();
  }
  return found.map(({ id }) => id);
}

/** Samples in order of arrival: by score, the share handed out would not be a random one. */
export function sampleCandidates(view: RankingView, wanted: Wanted): string[] {
  const found: string[] = [];
  for (let position = 0; position < view.size && found.length < wanted.limit; position++) {
    const facts = view.arrivedAt(position);
    if (facts.kind === "sample" && isWanted(facts, wanted)) found.push(facts.id);
  }
  return found;
}

const isWanted = (facts: Parameters<typeof isTakeable>[0] & { id: string }, { asker, now, skip }: Wanted) =>
  !skip.has(facts.id) && isTakeable(facts, asker, now);
