import type { TrailInput } from "./schema";

export type TrailFilters = Omit<TrailInput, "cursor" | "limit">;

type Known = {
  /** The act that was asked for, where the trail has it. */
  act: string | null;
  /** Of the case that was asked for, where there is one. */
  caseId: string | null | undefined;
};

const WITH_UUID = /^[a-z_]+:([0-9a-f]{8}(?:-[0-9a-f]{4}){3}-[0-9a-f]{12})$/;

/**
 * What the trail keeps of a search: which filters were used, and of what they said only ids, moments and acts that
 * exist. Whatever else was typed may be somebody's name, and an entry can never be changed.
 */
export function searchFacts(filters: TrailFilters, known: Known): Record<string, unknown> {
  const { person, subject, from, to } = filters;
  const facts = {
    act: known.act,
    person,
    caseId: known.caseId,
    subjectId: subject && WITH_UUID.exec(subject)?.[1],
    from: from && new Date(from).toISOString(),
    to: to && new Date(to).toISOString(),
  };
  const used = Object.entries(filters).filter(([, value]) => value !== undefined && value !== "");
  return {
    filters: used.map(([name]) => name).sort(),
    ...Object.fromEntries(Object.entries(facts).filter(([, value]) => value)),
  };
}
