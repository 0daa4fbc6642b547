import { cursorOf } from "./cursor";
import { firstBehind, type Place } from "./ranking/order";
import type { RankingView } from "./ranking/view";
import type { CaseFacts } from "./ranking/waiting-cases";

export type RankedCase = { caseId: string; logit: number };
export type QueuePage = { version: number; total: number; cases: RankedCase[]; next: string | null };

/** The matching cases behind a place, at most `limit`, and how many match on the whole list. */
export function pageOf(
  view: RankingView,
  matches: (facts: CaseFacts) => boolean,
  after: Place | null,
  limit: number,
): QueuePage {
  const from = after ? firstBehind(view.size, (index) => view.placeAt(index), after) : 0;
  const cases: RankedCase[] = [];
  let total = 0;
  let last = -1;
  let goesOn = false;
  for (let index = 0; index < view.size; index++) {
    const facts = view.caseAt(index);
    if (!matches(facts)) continue;
    total += 1;
    if (index < from) continue;
    if (cases.length === limit) {
      goesOn = true;
      continue;
    }
    cases.push({ caseId: facts.id, logit: view.logitAt(index) });
    last = index;
  }
  const next = goesOn ? cursorOf(view.version, view.placeAt(last)) : null;
  return { version: view.version, total, cases, next };
}
