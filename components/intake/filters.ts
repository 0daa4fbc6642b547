import { parseAsString, parseAsStringLiteral } from "nuqs";
import { IMPORT_STATES } from "@/lib/transactions/codes";

/** The list's filters as they stand in the address. */
export const IMPORT_FILTERS = {
  search: parseAsString,
  state: parseAsStringLiteral(IMPORT_STATES),
};
