import type { CaseFacts } from "./ranking/waiting-cases";
import type { QueueInput } from "./schema";
import { maySee, type Reader } from "./visibility";

type Filter = Pick<QueueInput, "zone" | "channel" | "state" | "assignee" | "search">;

/** Whether a case belongs on the list that this reader asked for. */
export function matcherOf(filter: Filter, reader: Reader): (facts: CaseFacts) => boolean {
  const search = filter.search?.toLowerCase() || null;
  return (facts) =>
    (filter.zone === undefined || facts.zone === filter.zone) &&
    (filter.channel === undefined || facts.channel === filter.channel) &&
    (filter.state === undefined || facts.state === filter.state) &&
    maySee(facts, reader) &&
    isAssigned(facts, filter.assignee, reader) &&
    (search === null || isFound(facts, search));
}

function isAssigned(facts: CaseFacts, assignee: Filter["assignee"], reader: Reader): boolean {
  if (assignee === undefined) return true;
  if (assignee === "nobody") return facts.assignedTo === null;
  if (assignee !== "me") return facts.assignedTo === assignee;
  return (
    reader.personId !== null && (facts.assignedTo === reader.personId || facts.claimedBy === reader.personId)
  );
}

/** By part of the payment's identifier or account, or by the whole case number. */
function isFound(facts: CaseFacts, search: string): boolean {
  return (
    facts.externalId.toLowerCase().includes(search) ||
    facts.accountId.toLowerCase().includes(search) ||
    String(facts.number) === search
  );
}
