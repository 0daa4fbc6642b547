import { parseAsInteger, parseAsString, parseAsStringLiteral } from "nuqs";
import { UNDECIDED_STATES } from "@/lib/cases/codes";
import { DIRECTIONS, FLOOR_CONCERNS, FLOOR_SORTS } from "@/lib/floor/codes";
import { ZONES } from "@/lib/policy/codes";
import { CHANNELS } from "@/lib/transactions/codes";

/** Cases a page of the list shows at first, and each time more are asked for. */
export const PAGE_OF_CASES = 100;
/** Shown and chosen at once at most: one act takes no more. */
export const MOST_CASES = 500;

/** The list's filters as they stand in the address. */
export const FILTERS = {
  state: parseAsStringLiteral(UNDECIDED_STATES),
  zone: parseAsStringLiteral(ZONES),
  channel: parseAsStringLiteral(CHANNELS),
  /** A person's id, or `nobody`. */
  person: parseAsString,
  concern: parseAsStringLiteral(FLOOR_CONCERNS),
  search: parseAsString,
  sort: parseAsStringLiteral(FLOOR_SORTS),
  direction: parseAsStringLiteral(DIRECTIONS),
  limit: parseAsInteger,
};
