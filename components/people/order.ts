import type { PersonView } from "@/lib/people/schema";

export const PEOPLE_ORDERS = ["name", "last_sign_in"] as const;
export type PeopleOrder = (typeof PEOPLE_ORDERS)[number];

/** By name as the server lists them, or whoever signed in longest ago first: those are the accounts to look at. */
export function inOrder(people: readonly PersonView[], order: PeopleOrder): PersonView[] {
  if (order === "name") return [...people];
  return people.toSorted((a, b) => (a.lastSignInAt ?? "").localeCompare(b.lastSignInAt ?? ""));
}
