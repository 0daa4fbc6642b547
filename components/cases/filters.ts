import { parseAsString, parseAsStringLiteral } from "nuqs";
import { UNDECIDED_STATES } from "@/lib/cases/codes";
import { ZONES } from "@/lib/policy/codes";
import { CHANNELS } from "@/lib/transactions/codes";

/** Filters of the list of cases as they stand in the address; the names are those of `GET /api/queue`. */
export const CASE_FILTERS = {
  search: parseAsString,
  zone: parseAsStringLiteral(ZONES),
  channel: parseAsStringLiteral(CHANNELS),
  state: parseAsStringLiteral(UNDECIDED_STATES),
  assignee: parseAsStringLiteral(["me", "nobody"]),
};
