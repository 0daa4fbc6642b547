import type { CaseFacts } from "./ranking/waiting-cases";
import type { QueueInput } from "./schema";
import type { Reader } from "./visibility";

type Filter = Pick<QueueInput, "zone" | "channel" | "state" | "assignee" | "search">;
export type Matcher = (facts: CaseFacts) => boolean;

/** Whether a case belongs on the list as it was asked for; null where nothing was asked for. */
export function matcherOf(
  { zone, channel, state, assignee, search }: Filter,
  reader: Reader,
): Matcher | null {
  const searched = search?.toLowerCase() || null;
  if ([zone, channel, state, assignee, searched].every((part) => part === undefined || part === null))
    return null;
  return (facts) =>
    (zone === undefined || facts.zone === zone) &&
    (channel === undefined || facts.channel === channel) &&
    (state === undefined || facts.state === state) &&
    isAssigned(facts, assignee, reader) &&
    (searched === null || isFound(facts, searched));
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
