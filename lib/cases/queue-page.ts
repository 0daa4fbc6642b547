import { cursorOf } from "./cursor";
import type { Matcher } from "./queue-filter";
import { firstBehind, type Place } from "./ranking/order";
import type { RankingView } from "./ranking/view";
import type { Reader } from "./visibility";

export type RankedCase = { caseId: string; logit: number };
export type QueuePage = { version: number; total: number; cases: RankedCase[]; next: string | null };

/**
 * The matching cases behind a place that the reader may see, at most `limit`, and how many there are on the whole list.
 * @param matches null when nothing but the reader's sight narrows the list
 */
export function pageOf(
  view: RankingView,
  reader: Reader,
  matches: Matcher | null,
  after: Place | null,
  limit: number,
): QueuePage {
  const cases: RankedCase[] = [];
  let next: string | null = null;
  let last = -1;
  const from = after ? firstBehind(view.size, (index) => view.placeAt(index), after) : 0;
  for (let index = from; index < view.size; index++) {
    if (!view.isSeenAt(index, reader) || (matches && !matches(view.caseAt(index)))) continue;
    if (cases.length === limit) {
      next = cursorOf(view.version, view.placeAt(last));
      break;
    }
    cases.push({ caseId: view.caseAt(index).id, logit: view.logitAt(index) });
    last = index;
  }
  return { version: view.version, total: view.countSeenBy(reader, matches), cases, next };
}
